import type { MailGateway } from './smtp.ts';

/** The outside world, as far as features may see it. */
export interface Gateways {
  readonly mail: MailGateway;
}

export { type MailGateway, type OutgoingMail, smtpGateway } from './smtp.ts';
