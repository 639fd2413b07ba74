import Stripe from 'stripe';
import { expect } from 'vitest';
import { type ControlClient, createControlClient } from '#stand-ins/stripe-mock/control-client';
import {
  DEFAULT_SECRET_KEY,
  DEFAULT_WEBHOOK_SECRET,
  type RunningStripeMock,
  type StripeMockOptions,
  startStripeMock,
} from '#stand-ins/stripe-mock/start-stripe-mock';
import { loadPublishedSchemas } from './published-schemas.ts';
import { startWebhookReceiver, type WebhookReceiver } from './webhook-receiver.ts';

/** Where the clock stands, unless a test moves it: a Monday morning. */
export const START = '2026-03-02T09:00:00.000Z';
export const START_SECONDS = Date.parse(START) / 1_000;
export const MINUTE_MS = 60_000;
export const HOUR_MS = 60 * MINUTE_MS;
export const DAY_MS = 24 * HOUR_MS;

const schemas = loadPublishedSchemas();

export interface TestBed {
  readonly mock: RunningStripeMock;
  readonly stripe: Stripe;
  readonly control: ControlClient;
  readonly receiver: WebhookReceiver;
  /** Ends everything, after checking all answers and events by the published schemas and that the books add up. */
  close(): Promise<void>;
}

/**
 * A stand-in with a frozen clock, the official SDK in front of it, and a receiver of its events behind it.
 * Nothing listens on a fixed port and nothing depends on how long anything takes.
 */
export async function openTestBed(options: StripeMockOptions = {}): Promise<TestBed> {
  const mock = await startStripeMock(options);
  const control = createControlClient(mock.controlUrl);
  let clockMs = Date.parse(START);
  await control.setClock(START, { frozen: true });
  const receiver = await startWebhookReceiver(DEFAULT_WEBHOOK_SECRET, () => clockMs);
  await control.setWebhook({ url: receiver.url });
  const answers: unknown[] = [];
  return {
    mock,
    stripe: sdkFor(mock, { httpClient: keepingHttpClient(answers) }),
    control: {
      ...control,
      advanceClock: async (ms) => {
        clockMs += ms;
        return control.advanceClock(ms);
      },
    },
    receiver,
    close: async () => {
      await control.idle();
      const { problems } = await control.dump();
      const events = await sdkFor(mock).events.list({ limit: 100 });
      await mock.stop();
      await receiver.close();
      expect(problems).toEqual([]);
      expect(schemas?.problemsOf([answers, events]) ?? []).toEqual([]);
    },
  };
}

/** The official SDK as the application uses it: by host, port and protocol, without retries unless asked for. */
export function sdkFor(
  mock: RunningStripeMock,
  options: Stripe.StripeConfig = {},
  key = DEFAULT_SECRET_KEY,
): Stripe {
  const { hostname, port } = new URL(mock.apiUrl);
  return new Stripe(key, {
    host: hostname,
    port,
    protocol: 'http',
    telemetry: false,
    maxNetworkRetries: 0,
    ...options,
  });
}

/** The SDK's own client over fetch, with a copy of every answer kept. */
function keepingHttpClient(answers: unknown[]): Stripe.HttpClient {
  return Stripe.createFetchHttpClient(async (input: RequestInfo | URL, init?: RequestInit) => {
    const response = await fetch(input, init);
    answers.push(await response.clone().json());
    return response;
  });
}

export interface SessionOptions extends Partial<Stripe.Checkout.SessionCreateParams> {
  readonly amount?: number;
}

/** Parameters of a session as the application sends them. */
export function sessionParameters({
  amount = 50_000,
  ...more
}: SessionOptions = {}): Stripe.Checkout.SessionCreateParams {
  return {
    mode: 'payment',
    ui_mode: 'hosted_page',
    allowed_payment_method_types: ['card'],
    adaptive_pricing: { enabled: false },
    line_items: [
      {
        quantity: 1,
        price_data: { currency: 'eur', unit_amount: amount, product_data: { name: 'Deposit, both eyes' } },
      },
    ],
    success_url: 'http://127.0.0.1/pay/done?session={CHECKOUT_SESSION_ID}',
    cancel_url: 'http://127.0.0.1/pay/back',
    client_reference_id: 'attempt-1',
    metadata: { attempt: 'attempt-1' },
    payment_intent_data: { metadata: { attempt: 'attempt-1' } },
    ...more,
  };
}

export const openSession = (
  bed: TestBed,
  options: SessionOptions = {},
  request: Stripe.RequestOptions = {},
) => bed.stripe.checkout.sessions.create(sessionParameters(options), request);

export interface PaidSession {
  readonly session: Stripe.Checkout.Session;
  readonly intent: Stripe.PaymentIntent;
  readonly charge: Stripe.Charge;
}

/** A session paid with a card that is accepted, and what came of it. */
export async function payNewSession(
  bed: TestBed,
  cardNumber: string,
  options: SessionOptions = {},
): Promise<PaidSession> {
  const { id } = await openSession(bed, options);
  const { outcome } = await bed.control.pay(id, cardNumber);
  expect(outcome).toBe('paid');
  const session = await bed.stripe.checkout.sessions.retrieve(id, {
    expand: ['payment_intent.latest_charge'],
  });
  const intent = session.payment_intent as Stripe.PaymentIntent;
  return { session, intent, charge: intent.latest_charge as Stripe.Charge };
}

/** The error a call ends with; a call that succeeds fails the test. */
export async function errorOf(call: Promise<unknown>): Promise<Stripe.errors.StripeError> {
  const error: unknown = await call.then(
    () => null,
    (reason: unknown) => reason,
  );
  if (error instanceof Stripe.errors.StripeError) return error;
  throw new Error(`Expected the SDK to reject with an error of the service, got ${String(error)}`);
}
