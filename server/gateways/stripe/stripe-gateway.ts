import Stripe from 'stripe';
import { type CurrencyCode, currencyCode, type Minor } from '#domain/money/index';
import { type Instant, instantOfMs, msOf } from '#domain/time/index';
import type { Config } from '#server/platform/config';
import { fromProcessorAmount, toProcessorAmount } from './processor-amount.ts';

/**
 * Everything that is sent to open a checkout, stored with the attempt, so that a retry sends the same bytes under the
 * same key. Nothing clinical: a course number and an amount.
 */
export interface CheckoutRequest {
  readonly attemptKey: string;
  readonly currency: CurrencyCode;
  readonly amountMinor: Minor;
  /** What the payer reads on the hosted page ("Deposit, course LQ-C-0377"). */
  readonly description: string;
  readonly email: string | null;
  readonly successUrl: string;
  readonly cancelUrl: string;
  /** Whole seconds since 1970, 30 minutes to 24 hours ahead. */
  readonly expiresAtSeconds: number;
}

/** A hosted checkout as the processor tells it now. */
export interface Checkout {
  readonly sessionId: string;
  readonly attemptKey: string | null;
  readonly status: 'open' | 'complete' | 'expired';
  readonly paid: boolean;
  readonly url: string | null;
  readonly currency: CurrencyCode;
  readonly amountMinor: Minor;
  readonly paymentIntentId: string | null;
  readonly chargeId: string | null;
}

/** One movement on the balance the processor keeps for us. net = amount − fee. */
export interface BalanceMovement {
  readonly id: string;
  /** The processor's reporting category: charge, refund, refund_failure, dispute, dispute_reversal, fee, payout, … */
  readonly category: string;
  readonly sourceId: string | null;
  readonly currency: CurrencyCode;
  readonly amountMinor: Minor;
  readonly feeMinor: Minor;
  readonly netMinor: Minor;
  readonly availableAt: Instant;
  readonly createdAt: Instant;
}

export interface ProcessorPayout {
  readonly id: string;
  readonly status: 'pending' | 'in_transit' | 'paid' | 'failed' | 'canceled';
  readonly currency: CurrencyCode;
  readonly amountMinor: Minor;
  readonly arrivesAt: Instant;
  readonly createdAt: Instant;
}

/** A verified event: only its id, type and object id are believed; the truth is fetched anew. */
export interface ProcessorEvent {
  readonly id: string;
  readonly type: string;
  readonly objectId: string;
  readonly createdAt: Instant;
}

/** Why a call failed: 'refused' will fail again, 'unsure' may or may not have happened, repeat it under the same key. */
export class ProcessorError extends Error {
  readonly kind: 'refused' | 'unsure';
  readonly code: string;

  constructor(kind: 'refused' | 'unsure', code: string, message: string) {
    super(message);
    this.kind = kind;
    this.code = code;
  }
}

export interface StripeGateway {
  /** Opens a hosted checkout; the attempt key is the idempotency key, so repeating is safe. */
  openCheckout(request: CheckoutRequest): Promise<Checkout>;
  fetchCheckout(sessionId: string): Promise<Checkout>;
  /** Asks to expire an open checkout and tells what it is afterwards: it may have been paid meanwhile. */
  expireCheckout(sessionId: string): Promise<Checkout>;
  /** Finds a checkout made for an attempt whose answer was lost, newest first since a moment. */
  findCheckout(attemptKey: string, since: Instant): Promise<Checkout | undefined>;
  /** The checkout a payment intent belongs to. */
  checkoutOfIntent(paymentIntentId: string): Promise<Checkout | undefined>;
  balanceMovements(filter: { payoutId?: string; since?: Instant }): Promise<BalanceMovement[]>;
  payouts(since: Instant): Promise<ProcessorPayout[]>;
  fetchPayout(payoutId: string): Promise<ProcessorPayout>;
  /** What the processor holds for us now: available and pending together. */
  balance(currency: CurrencyCode): Promise<Minor>;
  /** Events since a moment, oldest first: what the sweep looks through for those that never arrived. */
  eventsSince(since: Instant): Promise<ProcessorEvent[]>;
  /** Checks the signature of a webhook; undefined when it is not from the processor or its time is off. */
  verifyEvent(rawBody: Buffer, signature: string, receivedAt: Instant): ProcessorEvent | undefined;
}

const TIMEOUT_MS = 10_000;
const TOLERANCE_SECONDS = 300;

/** The gateway over the official SDK, pointed where the configuration says. */
export function stripeGateway(config: Config['stripe']): StripeGateway {
  const stripe = new Stripe(config.secretKey, {
    ...(config.host === undefined ? {} : { host: config.host }),
    ...(config.port === undefined ? {} : { port: config.port }),
    protocol: config.protocol,
    telemetry: false,
    timeout: TIMEOUT_MS,
    maxNetworkRetries: 2,
  });
  return {
    openCheckout: (request) =>
      translated(async () =>
        asCheckout(
          await stripe.checkout.sessions.create(createParams(request), {
            idempotencyKey: request.attemptKey,
          }),
        ),
      ),
    fetchCheckout: (sessionId) =>
      translated(async () =>
        asCheckout(await stripe.checkout.sessions.retrieve(sessionId, { expand: ['payment_intent'] })),
      ),
    async expireCheckout(sessionId) {
      try {
        return await translated(async () =>
          asCheckout(
            await stripe.checkout.sessions.expire(sessionId, {}, { idempotencyKey: `expire-${sessionId}` }),
          ),
        );
      } catch (error) {
        if (!(error instanceof ProcessorError) || error.kind !== 'refused') throw error;
        return await this.fetchCheckout(sessionId);
      }
    },
    findCheckout: (attemptKey, since) =>
      translated(async () => {
        for await (const session of stripe.checkout.sessions.list({
          created: { gte: secondsOf(since) },
          limit: 100,
        })) {
          if (session.client_reference_id === attemptKey) return asCheckout(session);
        }
        return undefined;
      }),
    checkoutOfIntent: (paymentIntentId) =>
      translated(async () => {
        const [session] = (await stripe.checkout.sessions.list({ payment_intent: paymentIntentId, limit: 1 }))
          .data;
        return session
          ? asCheckout(await stripe.checkout.sessions.retrieve(session.id, { expand: ['payment_intent'] }))
          : undefined;
      }),
    balanceMovements: (filter) =>
      translated(async () => {
        const params = {
          limit: 100,
          ...(filter.payoutId ? { payout: filter.payoutId } : {}),
          ...(filter.since ? { created: { gte: secondsOf(filter.since) } } : {}),
        };
        const found: BalanceMovement[] = [];
        for await (const row of stripe.balanceTransactions.list(params)) found.push(asMovement(row));
        return found.reverse();
      }),
    payouts: (since) =>
      translated(async () => {
        const found: ProcessorPayout[] = [];
        for await (const payout of stripe.payouts.list({ created: { gte: secondsOf(since) }, limit: 100 }))
          found.push(asPayout(payout));
        return found.reverse();
      }),
    fetchPayout: (payoutId) => translated(async () => asPayout(await stripe.payouts.retrieve(payoutId))),
    balance: (currency) =>
      translated(async () => {
        const balance = await stripe.balance.retrieve();
        const units = [...balance.available, ...balance.pending]
          .filter((part) => part.currency.toUpperCase() === currency)
          .reduce((total, part) => total + part.amount, 0);
        return fromProcessorAmount(units, currency);
      }),
    eventsSince: (since) =>
      translated(async () => {
        const found: ProcessorEvent[] = [];
        for await (const event of stripe.events.list({ created: { gte: secondsOf(since) }, limit: 100 }))
          found.push(asEvent(event));
        return found.reverse();
      }),
    verifyEvent: (rawBody, signature, receivedAt) =>
      verify(stripe, config.webhookSecrets, rawBody, signature, receivedAt),
  };
}

function createParams(request: CheckoutRequest): Stripe.Checkout.SessionCreateParams {
  const amount = toProcessorAmount(request.amountMinor, request.currency);
  if (!amount.ok)
    throw new ProcessorError('refused', amount.why, `The amount cannot be taken online: ${amount.why}`);
  const metadata = { attempt: request.attemptKey };
  return {
    mode: 'payment',
    ui_mode: 'hosted_page',
    allowed_payment_method_types: ['card'],
    adaptive_pricing: { enabled: false },
    client_reference_id: request.attemptKey,
    ...(request.email ? { customer_email: request.email } : {}),
    line_items: [
      {
        quantity: 1,
        price_data: {
          currency: request.currency.toLowerCase(),
          unit_amount: amount.units,
          product_data: { name: request.description },
        },
      },
    ],
    metadata,
    payment_intent_data: { metadata },
    success_url: request.successUrl,
    cancel_url: request.cancelUrl,
    expires_at: request.expiresAtSeconds,
  } as Stripe.Checkout.SessionCreateParams;
}

function asCheckout(session: Stripe.Checkout.Session): Checkout {
  const currency = currencyCode((session.currency ?? '').toUpperCase());
  const intent = session.payment_intent;
  const charge = intent !== null && typeof intent === 'object' ? intent.latest_charge : null;
  return {
    sessionId: session.id,
    attemptKey: session.client_reference_id,
    status: session.status as Checkout['status'],
    paid: session.payment_status === 'paid',
    url: session.url ?? null,
    currency,
    amountMinor: fromProcessorAmount(session.amount_total ?? 0, currency),
    paymentIntentId: idOf(intent),
    chargeId: idOf(charge),
  };
}

function asMovement(row: Stripe.BalanceTransaction): BalanceMovement {
  const currency = currencyCode(row.currency.toUpperCase());
  return {
    id: row.id,
    category: row.reporting_category,
    sourceId: idOf(row.source),
    currency,
    amountMinor: fromProcessorAmount(row.amount, currency),
    feeMinor: fromProcessorAmount(row.fee, currency),
    netMinor: fromProcessorAmount(row.net, currency),
    availableAt: instantOfMs(row.available_on * 1000),
    createdAt: instantOfMs(row.created * 1000),
  };
}

function asPayout(payout: Stripe.Payout): ProcessorPayout {
  const currency = currencyCode(payout.currency.toUpperCase());
  return {
    id: payout.id,
    status: payout.status as ProcessorPayout['status'],
    currency,
    amountMinor: fromProcessorAmount(payout.amount, currency),
    arrivesAt: instantOfMs(payout.arrival_date * 1000),
    createdAt: instantOfMs(payout.created * 1000),
  };
}

function asEvent(event: Stripe.Event): ProcessorEvent {
  const object = event.data.object as { id?: string };
  return {
    id: event.id,
    type: event.type,
    objectId: object.id ?? '',
    createdAt: instantOfMs(event.created * 1000),
  };
}

function verify(
  stripe: Stripe,
  secrets: readonly string[],
  rawBody: Buffer,
  signature: string,
  receivedAt: Instant,
): ProcessorEvent | undefined {
  const stamp = /(?:^|,)t=(\d+)/.exec(signature)?.[1];
  // The SDK refuses old time stamps but takes any in the future: both are refused here.
  if (!stamp || Number(stamp) - msOf(receivedAt) / 1000 > TOLERANCE_SECONDS) return undefined;
  for (const secret of secrets) {
    try {
      return asEvent(
        stripe.webhooks.constructEvent(
          rawBody,
          signature,
          secret,
          TOLERANCE_SECONDS,
          undefined,
          msOf(receivedAt),
        ),
      );
    } catch (error) {
      if (!(error instanceof Stripe.errors.StripeSignatureVerificationError)) throw error;
    }
  }
  return undefined;
}

/** Certain refusals are told apart from answers that never came. */
async function translated<T>(work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (error) {
    if (!(error instanceof Stripe.errors.StripeError)) throw error;
    const certain =
      error.statusCode !== undefined &&
      error.statusCode >= 400 &&
      error.statusCode < 500 &&
      error.statusCode !== 409 &&
      error.statusCode !== 429;
    throw new ProcessorError(certain ? 'refused' : 'unsure', error.code ?? error.type, error.message);
  }
}

function secondsOf(at: Instant): number {
  return Math.floor(msOf(at) / 1000);
}

function idOf(value: string | { id: string } | null | undefined): string | null {
  if (value === null || value === undefined) return null;
  return typeof value === 'string' ? value : value.id;
}
