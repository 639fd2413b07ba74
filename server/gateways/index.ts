import type { MailGateway } from './smtp.ts';
import type { StripeGateway } from './stripe/stripe-gateway.ts';

/** The outside world, as far as features may see it. */
export interface Gateways {
  readonly mail: MailGateway;
  readonly stripe: StripeGateway;
}

export { type MailGateway, type OutgoingMail, smtpGateway } from './smtp.ts';
export {
  type BalanceMovement,
  type Checkout,
  type CheckoutRequest,
  ProcessorError,
  type ProcessorEvent,
  type ProcessorPayout,
  type StripeGateway,
  stripeGateway,
} from './stripe/stripe-gateway.ts';
