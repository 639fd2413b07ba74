import { schedule, unschedule } from '#stand-ins/stripe-mock/clock/tasks';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import { settingsOf, stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type {
  CardFailure,
  CardRecord,
  ChargeRecord,
  IntentRecord,
  Payer,
  SessionRecord,
} from '#stand-ins/stripe-mock/state/records';
import { emit } from '#stand-ins/stripe-mock/webhooks/events';
import { book } from './balance.ts';
import { behaviourOf, brandOf, declineOf, needsAuthentication } from './cards.ts';
import { chargeFee } from './fees.ts';

export interface CardEntry {
  /** Digits only. */
  readonly number: string;
  readonly expMonth: number;
  readonly expYear: number;
  readonly payer: Payer;
}

export type PaymentOutcome =
  | { readonly kind: 'paid' }
  | { readonly kind: 'must_authenticate' }
  | { readonly kind: 'declined'; readonly message: string }
  | { readonly kind: 'not_open' };

const REFUSED_AUTHENTICATION: CardFailure = {
  code: 'payment_intent_authentication_failure',
  declineCode: null,
  message:
    'We are unable to authenticate your payment method. Please choose a different payment method and try again.',
  param: null,
};

/** The payer confirms with a card. Only now does a payment intent come to be. */
export function confirmPayment(service: Service, sessionId: string, entry: CardEntry): PaymentOutcome {
  return service.store.transact(() => {
    const session = service.store.get('sessions', sessionId);
    if (session.status !== 'open') return { kind: 'not_open' };
    const card = keepCard(service, session, entry);
    const intent = intentOf(service, session);
    if (!needsAuthentication(card.behaviour)) return tryCharge(service, intent, card, false);
    const waiting = service.store.put('intents', {
      ...intent,
      status: 'requires_action',
      paymentMethod: card.id,
      lastFailure: null,
    });
    emit(service, 'payment_intent.requires_action', 'intents', waiting);
    return { kind: 'must_authenticate' };
  });
}

/** The payer's answer in the separate authentication step; without an open question nothing happens. */
export function answerAuthentication(service: Service, sessionId: string, approved: boolean): PaymentOutcome {
  return service.store.transact(() => {
    const session = service.store.get('sessions', sessionId);
    const intent = service.store.find('intents', session.paymentIntent);
    if (session.status !== 'open' || intent?.status !== 'requires_action') return { kind: 'not_open' };
    const card = service.store.get('cards', intent.paymentMethod ?? '');
    if (approved) return tryCharge(service, intent, card, true);
    return fail(service, intent, card, REFUSED_AUTHENTICATION, null);
  });
}

function keepCard(service: Service, session: SessionRecord, entry: CardEntry): CardRecord {
  return service.store.put('cards', {
    ...stamp(service, newId('pm')),
    behaviour: behaviourOf(entry.number),
    brand: brandOf(entry.number),
    last4: entry.number.slice(-4),
    expMonth: entry.expMonth,
    expYear: entry.expYear,
    payer: { name: entry.payer.name, email: session.customerEmail ?? entry.payer.email },
    customer: session.customer,
  });
}

function intentOf(service: Service, session: SessionRecord): IntentRecord {
  const existing = service.store.find('intents', session.paymentIntent);
  if (existing !== undefined) return existing;
  const id = newId('pi');
  const intent = service.store.put('intents', {
    ...stamp(service, id),
    sessionId: session.id,
    status: 'requires_payment_method',
    amount: session.amountTotal,
    currency: session.currency,
    customer: session.customer,
    // The session's own metadata stays with the session.
    metadata: session.intentMetadata,
    description: session.intentDescription,
    receiptEmail: session.receiptEmail,
    clientSecret: newId(`${id}_secret`),
    latestCharge: null,
    paymentMethod: null,
    lastFailure: null,
    canceledAt: null,
  });
  service.store.put('sessions', { ...session, paymentIntent: id });
  emit(service, 'payment_intent.created', 'intents', intent);
  return intent;
}

function tryCharge(
  service: Service,
  intent: IntentRecord,
  card: CardRecord,
  authenticated: boolean,
): PaymentOutcome {
  const failure = declineOf(card.behaviour);
  const charge = service.store.put('charges', {
    ...stamp(service, newId('ch')),
    status: failure === null ? 'succeeded' : 'failed',
    amount: intent.amount,
    currency: intent.currency,
    intentId: intent.id,
    cardId: card.id,
    customer: intent.customer,
    metadata: intent.metadata,
    description: intent.description,
    receiptEmail: intent.receiptEmail,
    authenticated,
    failure,
    balanceTransaction: null,
  });
  if (failure !== null) return fail(service, intent, card, failure, charge);
  return succeed(service, intent, card, charge);
}

function fail(
  service: Service,
  intent: IntentRecord,
  card: CardRecord,
  failure: CardFailure,
  charge: ChargeRecord | null,
): PaymentOutcome {
  const open = service.store.put('intents', {
    ...intent,
    status: 'requires_payment_method',
    latestCharge: charge?.id ?? intent.latestCharge,
    paymentMethod: null,
    lastFailure: { ...failure, charge: charge?.id ?? null, paymentMethod: card.id },
  });
  if (charge !== null) emit(service, 'charge.failed', 'charges', charge);
  emit(service, 'payment_intent.payment_failed', 'intents', open);
  return { kind: 'declined', message: failure.message };
}

function succeed(
  service: Service,
  intent: IntentRecord,
  card: CardRecord,
  charge: ChargeRecord,
): PaymentOutcome {
  const paid = service.store.put('intents', {
    ...intent,
    status: 'succeeded',
    latestCharge: charge.id,
    paymentMethod: card.id,
    lastFailure: null,
  });
  const session = service.store.put('sessions', {
    ...service.store.get('sessions', intent.sessionId),
    status: 'complete',
    paymentStatus: 'paid',
    payer: card.payer,
  });
  unschedule(service, 'expire_session', session.id);
  emit(service, 'charge.succeeded', 'charges', charge);
  emit(service, 'payment_intent.succeeded', 'intents', paid);
  emit(service, 'checkout.session.completed', 'sessions', session);
  const nowMs = service.clock.nowMs();
  schedule(service, 'attach_fee', charge.id, nowMs + settingsOf(service).feeDelayMs);
  if (card.behaviour === 'disputed') schedule(service, 'open_dispute', charge.id, nowMs);
  if (card.behaviour === 'inquiry') schedule(service, 'open_inquiry', charge.id, nowMs);
  return { kind: 'paid' };
}

const DAYS_UNTIL_AVAILABLE = 2;
const DAY_SECONDS = 86_400;

/**
 * Books a charge into the balance, fee included. It happens after the success was told: a charge has no balance
 * transaction yet when its first events go out.
 */
export function attachFee(service: Service, chargeId: string): void {
  const charge = service.store.get('charges', chargeId);
  if (charge.balanceTransaction !== null) return;
  const before = present(service, 'charges', charge);
  const dayOfCharge = charge.created - (charge.created % DAY_SECONDS);
  const row = book(service, {
    type: 'charge',
    reportingCategory: 'charge',
    amount: charge.amount,
    fee: chargeFee(charge.amount),
    feeDescription: 'Card fee of the invented tariff',
    currency: charge.currency,
    source: charge.id,
    description: charge.description,
    availableOn: dayOfCharge + DAYS_UNTIL_AVAILABLE * DAY_SECONDS,
  });
  const booked = service.store.put('charges', { ...charge, balanceTransaction: row.id });
  emit(service, 'charge.updated', 'charges', booked, before);
}
