import { refused } from '#stand-ins/stripe-mock/api/errors';
import { SECOND_MS } from '#stand-ins/stripe-mock/clock/clock';
import { schedule, unschedule } from '#stand-ins/stripe-mock/clock/tasks';
import type { Service } from '#stand-ins/stripe-mock/service';
import { stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type { LineItem, SessionRecord, Stored } from '#stand-ins/stripe-mock/state/records';
import { emit } from '#stand-ins/stripe-mock/webhooks/events';

type ItemRequest = Pick<LineItem, 'name' | 'unitAmount' | 'quantity'>;

export type SessionRequest = Omit<
  SessionRecord,
  keyof Stored | 'status' | 'paymentStatus' | 'paymentIntent' | 'payer' | 'amountTotal' | 'lineItems'
> & { readonly items: readonly ItemRequest[] };

export function openSession(service: Service, { items, ...request }: SessionRequest): SessionRecord {
  const session = service.store.put('sessions', {
    ...stamp(service, newId('cs_test')),
    ...request,
    status: 'open',
    paymentStatus: 'unpaid',
    paymentIntent: null,
    payer: null,
    amountTotal: totalOf(items),
    lineItems: items.map((item) => ({
      ...item,
      id: newId('li'),
      priceId: newId('price'),
      productId: newId('prod'),
    })),
  });
  schedule(service, 'expire_session', session.id, session.expiresAt * SECOND_MS);
  return session;
}

export function totalOf(items: readonly ItemRequest[]): number {
  return items.reduce((total, item) => total + item.unitAmount * item.quantity, 0);
}

/**
 * Ends an open session unpaid; whatever its payer had begun is given up with it.
 *
 * @throws ApiError when the session is complete or expired already
 */
export function expireSession(service: Service, session: SessionRecord): SessionRecord {
  if (session.status !== 'open') {
    throw refused(
      `Only Checkout Sessions with a status in ["open"] can be expired. This Checkout Session has a status of ${session.status}.`,
    );
  }
  unschedule(service, 'expire_session', session.id);
  const expired = service.store.put('sessions', { ...session, status: 'expired' });
  const intent = service.store.find('intents', session.paymentIntent);
  if (intent !== undefined) {
    const canceled = service.store.put('intents', {
      ...intent,
      status: 'canceled',
      canceledAt: service.clock.nowSeconds(),
    });
    emit(service, 'payment_intent.canceled', 'intents', canceled);
  }
  emit(service, 'checkout.session.expired', 'sessions', expired);
  return expired;
}

/** The queue's way to expire: a session that was paid in time is left alone. */
export function expireWhenStillOpen(service: Service, sessionId: string): void {
  const session = service.store.get('sessions', sessionId);
  if (session.status === 'open') expireSession(service, session);
}
