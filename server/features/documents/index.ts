export { deliverDueMails, type MailDeps } from './deliver-mails.ts';
export {
  type DocumentMaker,
  type DocumentMakers,
  documentFor,
  type MadeDocument,
  type StoredDocument,
} from './document-for.ts';
export { documentsRoutes } from './documents-routes.ts';
export { documentMakers } from './makers.ts';
export { peopleMails } from './render/mails.ts';
export { subscribeDocuments } from './subscribe.ts';
