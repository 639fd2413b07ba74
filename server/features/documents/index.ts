export { deliverDueMails, type MailDeps } from './deliver-mails.ts';
export {
  type DocumentMaker,
  type DocumentMakers,
  documentFor,
  type MadeDocument,
  type StoredDocument,
} from './document-for.ts';
export { documentMakers, peopleMails } from './makers.ts';
