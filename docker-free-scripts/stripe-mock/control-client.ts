import type Stripe from 'stripe';
import type { ClockReading } from './control/clock-control.ts';
import type {
  DisputeOptions,
  EventFault,
  PayOptions,
  PayoutOptions,
  RequestFault,
  SetClock,
  Settings,
  WebhookTarget,
} from './control/commands.ts';
import type { Dump } from './control/dump.ts';
import type { PayResult } from './control/pay.ts';
import type { EventFaultRecord, RequestFaultRecord, RequestRecord, SettingsRecord } from './state/records.ts';

export type ControlClient = ReturnType<typeof createControlClient>;

/**
 * Typed calls to the control port, for tests and seeds. Amounts are minor units, instants ISO 8601.
 * Every call rejects with the stand-in's own sentence when it refuses.
 *
 * @param controlUrl address of the control port without a trailing slash
 */
export function createControlClient(controlUrl: string) {
  const call = async <T>(method: string, path: string, body?: object): Promise<T> => {
    const response = await fetch(`${controlUrl}/control/${path}`, {
      method,
      ...(body === undefined
        ? {}
        : { headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) }),
    });
    const answer: unknown = await response.json();
    if (response.ok) return answer as T;
    throw new Error(
      (answer as { error?: { message?: string } }).error?.message ??
        `The stand-in answered ${response.status}`,
    );
  };
  const post = <T>(path: string, body: object = {}) => call<T>('POST', path, body);
  return {
    clock: () => call<ClockReading>('GET', 'clock'),
    /** Moves the clock; forward, everything that falls due on the way has happened when this resolves. */
    setClock: (now: string, options: Omit<SetClock, 'now'> = {}) =>
      post<ClockReading>('clock', { now, ...options }),
    advanceClock: (ms: number) => post<ClockReading>('clock/advance', { ms }),
    /** Back to the machine's time, by way of everything due until then. */
    resetClock: () => post<ClockReading>('clock/reset'),

    setWebhook: (target: WebhookTarget) => post<Omit<SettingsRecord, 'webhookSecret'>>('webhook', target),
    set: (settings: Settings) => post<Omit<SettingsRecord, 'webhookSecret'>>('settings', settings),

    /** Completes a hosted session as a payer would, by the page's own code. */
    pay: (sessionId: string, cardNumber = '4242424242424242', options: PayOptions = {}) =>
      post<PayResult>(`sessions/${sessionId}/pay`, { cardNumber, ...options }),

    payoutNow: (options: PayoutOptions = {}) => post<Stripe.Payout[]>('payouts', options),
    /** Sends a payout and lets the bank have it, without waiting for the clock. */
    arrivePayout: (id: string) => post<Stripe.Payout>(`payouts/${id}/arrive`),
    failPayout: (id: string) => post<Stripe.Payout>(`payouts/${id}/fail`),
    cancelPayout: (id: string) => post<Stripe.Payout>(`payouts/${id}/cancel`),

    /** @param payment id of the charge, its payment intent or its session */
    openDispute: (payment: string, options: DisputeOptions = {}) =>
      post<Stripe.Dispute>(`payments/${payment}/dispute`, options),
    respond: (disputeId: string, text?: string) =>
      post<Stripe.Dispute>(`disputes/${disputeId}/respond`, text === undefined ? {} : { text }),
    closeDispute: (disputeId: string, won: boolean) =>
      post<Stripe.Dispute>(`disputes/${disputeId}/close`, { won }),

    settleRefund: (id: string) => post<Stripe.Refund>(`refunds/${id}/settle`),
    failRefund: (id: string) => post<Stripe.Refund>(`refunds/${id}/fail`),
    requireRefundAction: (id: string) => post<Stripe.Refund>(`refunds/${id}/require-action`),
    attachFee: (chargeId: string) => post<Stripe.Charge>(`charges/${chargeId}/attach-fee`),

    addFault: (fault: RequestFault) => post<RequestFaultRecord>('faults', fault),
    addEventFault: (fault: EventFault) => post<EventFaultRecord>('event-faults', fault),
    /** Takes back all faults, of requests and of events. */
    clearFaults: () => call<object>('DELETE', 'faults'),
    releaseHeld: (eventType = '*') => post<{ released: number }>('deliveries/release', { eventType }),
    /** Tries every waiting delivery again now. */
    retryDeliveries: () => post<{ retried: number }>('deliveries/retry'),
    /** Resolves when nothing due is left to do or to deliver. */
    idle: () => post<object>('idle'),

    dump: () => call<Dump>('GET', 'dump'),
    /** Everything asked of the API, the oldest first. */
    requests: () => call<RequestRecord[]>('GET', 'requests'),
  };
}
