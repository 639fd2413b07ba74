import Stripe from 'stripe';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { DEFAULT_WEBHOOK_SECRET } from '#stand-ins/stripe-mock/start-stripe-mock';
import type { TestBed } from './test-bed.ts';
import {
  DAY_MS,
  HOUR_MS,
  openSession,
  openTestBed,
  payNewSession,
  START,
  START_SECONDS,
} from './test-bed.ts';

// Source: the service's published pages on webhooks and signatures; the official SDK checks every signature.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

const CARD = '4242424242424242';
const COMPLETED = 'checkout.session.completed';
const ofType = (type: string) => bed.receiver.received.filter((received) => received.type === type);
const genuineness = (type: string) => ofType(type).map(({ genuine }) => genuine);

async function pay(): Promise<void> {
  await payNewSession(bed, CARD);
  await bed.control.idle();
}

describe('An event', () => {
  test('signed · by the SDK genuine, and the same as the list has it', async () => {
    await pay();
    const [received] = ofType(COMPLETED);
    const event = Stripe.webhooks.constructEvent(
      received?.body ?? '',
      received?.signature ?? '',
      DEFAULT_WEBHOOK_SECRET,
      300,
      undefined,
      Date.parse(START),
    );
    expect(event.api_version).toBe(Stripe.API_VERSION);
    const listed = await bed.stripe.events.retrieve(event.id);
    expect({ ...event, pending_webhooks: 0 }).toEqual({
      ...JSON.parse(JSON.stringify(listed)),
      pending_webhooks: 0,
    });
    expect([event.pending_webhooks, listed.pending_webhooks]).toEqual([1, 0]);
  });

  test('signed by the machine’s time where so set · genuine now, though the clock stands elsewhere', async () => {
    await bed.control.setWebhook({ url: bed.receiver.url, signatureTime: 'machine' });
    await pay();
    const { body = '', signature = '' } = ofType(COMPLETED)[0] ?? {};
    const event = Stripe.webhooks.constructEvent(body, signature, DEFAULT_WEBHOOK_SECRET);
    expect(event.created).toBe(START_SECONDS);
  });

  test('another secret · is not accepted', async () => {
    await pay();
    const [received] = ofType(COMPLETED);
    const verify = () =>
      Stripe.webhooks.constructEvent(
        received?.body ?? '',
        received?.signature ?? '',
        'whsec_other',
        300,
        undefined,
        Date.parse(START),
      );
    expect(verify).toThrow(Stripe.errors.StripeSignatureVerificationError);
  });

  test('carries the object as it was · while the object goes on', async () => {
    const { charge } = await payNewSession(bed, CARD);
    await bed.stripe.refunds.create({ charge: charge.id });
    const [event] = (await bed.stripe.events.list({ type: 'charge.succeeded' })).data;
    expect((event?.data.object as Stripe.Charge | undefined)?.amount_refunded).toBe(0);
  });

  test('listed · by type, by group, by several types', async () => {
    await pay();
    const types = async (filter: Stripe.EventListParams) =>
      (await bed.stripe.events.list(filter)).data.map(({ type }) => type);
    expect(await types({ type: COMPLETED })).toEqual([COMPLETED]);
    expect(await types({ type: 'payment_intent.*' })).toEqual([
      'payment_intent.succeeded',
      'payment_intent.created',
    ]);
    expect(await types({ types: ['charge.succeeded', COMPLETED] })).toEqual([COMPLETED, 'charge.succeeded']);
  });

  test('no receiver · nothing is sent, the events are there all the same', async () => {
    await bed.control.setWebhook({ url: null });
    await pay();
    expect(bed.receiver.received).toEqual([]);
    expect((await bed.stripe.events.list({ type: COMPLETED })).data[0]?.pending_webhooks).toBe(0);
  });
});

describe('A receiver that fails', () => {
  test('then recovers · the same event again, signed anew', async () => {
    bed.receiver.answerWith(500);
    await pay();
    expect(ofType(COMPLETED)).toHaveLength(1);
    expect((await bed.stripe.events.list({ delivery_success: false, type: COMPLETED })).data).toHaveLength(1);
    bed.receiver.answerWith(200);
    await bed.control.advanceClock(HOUR_MS);
    const tries = ofType(COMPLETED);
    expect(new Set(tries.map(({ id }) => id)).size).toBe(1);
    expect(new Set(tries.map(({ signature }) => signature)).size).toBe(2);
    // The second try falls an hour before the receiver's present, so its age is judged at its own time below.
    expect(tries[1]?.signature).toContain(`t=${START_SECONDS + 5},`);
    expect((await bed.stripe.events.list({ delivery_success: false })).data).toEqual([]);
  });

  test('for ever · is tried for three days and no longer', async () => {
    bed.receiver.answerWith(503);
    await openSession(bed, { expires_at: START_SECONDS + 1_800 });
    await bed.control.advanceClock(4 * DAY_MS);
    const tries = ofType('checkout.session.expired').length;
    expect(tries).toBeGreaterThan(8);
    await bed.control.advanceClock(4 * DAY_MS);
    expect(ofType('checkout.session.expired')).toHaveLength(tries);
    const { deliveries } = (await bed.control.dump()).state;
    const first = deliveries[0]?.attempts[0]?.atMs ?? 0;
    const last = deliveries[0]?.attempts.at(-1)?.atMs ?? 0;
    expect(deliveries[0]?.state).toBe('given_up');
    expect(last - first).toBeLessThanOrEqual(3 * DAY_MS);
    expect(last - first).toBeGreaterThan(2 * DAY_MS);
  });

  test('a redirect · is no success', async () => {
    bed.receiver.answerWith(302);
    await pay();
    expect((await bed.stripe.events.list({ delivery_success: false, type: COMPLETED })).data).toHaveLength(1);
  });

  test('asked to try now · does not wait', async () => {
    bed.receiver.answerWith(500);
    await pay();
    bed.receiver.answerWith(200);
    expect((await bed.control.retryDeliveries()).retried).toBe(5);
    await bed.control.idle();
    expect(ofType(COMPLETED)).toHaveLength(2);
  });
});

describe('Ordered faults', () => {
  test('drop · the event exists and is never told', async () => {
    await bed.control.addEventFault({ kind: 'drop', eventType: COMPLETED });
    await pay();
    expect(ofType(COMPLETED)).toEqual([]);
    expect((await bed.stripe.events.list({ type: COMPLETED })).data).toHaveLength(1);
  });

  test('double with the same id · told twice', async () => {
    await bed.control.addEventFault({ kind: 'duplicate_same_id', eventType: COMPLETED });
    await pay();
    const ids = ofType(COMPLETED).map(({ id }) => id);
    expect([ids.length, new Set(ids).size]).toEqual([2, 1]);
  });

  test('double with a new id · two events about one change', async () => {
    await bed.control.addEventFault({ kind: 'duplicate_new_id', eventType: COMPLETED });
    await pay();
    const events = ofType(COMPLETED).map(({ body }) => JSON.parse(body) as Stripe.Event);
    expect(new Set(events.map(({ id }) => id)).size).toBe(2);
    expect(events[0]?.data).toEqual(events[1]?.data);
  });

  test('delay · told when its time has come', async () => {
    await bed.control.addEventFault({ kind: 'delay', eventType: COMPLETED, delayMs: HOUR_MS });
    await pay();
    expect(ofType(COMPLETED)).toEqual([]);
    await bed.control.advanceClock(HOUR_MS);
    expect(genuineness(COMPLETED)).toEqual([true]);
  });

  test('hold · told when released', async () => {
    await bed.control.addEventFault({ kind: 'hold', eventType: 'payment_intent.*', times: 2 });
    await pay();
    expect(bed.receiver.types()).not.toContain('payment_intent.succeeded');
    expect(await bed.control.releaseHeld('payment_intent.succeeded')).toEqual({ released: 1 });
    await bed.control.idle();
    expect(bed.receiver.types().at(-1)).toBe('payment_intent.succeeded');
    expect(await bed.control.releaseHeld()).toEqual({ released: 1 });
  });

  test('reorder · the event comes after the next one', async () => {
    await bed.control.addEventFault({ kind: 'reorder', eventType: 'payment_intent.created' });
    await pay();
    const types = bed.receiver.types();
    expect(types.slice(0, 1)).toEqual(['charge.succeeded']);
    expect(types).toContain('payment_intent.created');
    expect(types).toHaveLength(5);
  });

  test.each(['stale_timestamp', 'wrong_secret'] as const)(
    '%s · refused at first, genuine at the next try',
    async (kind) => {
      await bed.control.addEventFault({ kind, eventType: COMPLETED });
      bed.receiver.answerWith(400);
      await pay();
      bed.receiver.answerWith(200);
      await bed.control.retryDeliveries();
      await bed.control.idle();
      expect(genuineness(COMPLETED)).toEqual([false, true]);
    },
  );

  test('used up by one event · the next is told as usual; cleared · gone', async () => {
    await bed.control.addEventFault({ kind: 'drop', eventType: COMPLETED });
    await pay();
    await pay();
    expect(ofType(COMPLETED)).toHaveLength(1);
    await bed.control.addEventFault({ kind: 'drop', eventType: '*', times: 99 });
    await bed.control.clearFaults();
    await pay();
    expect(ofType(COMPLETED)).toHaveLength(2);
  });
});

describe('The way back of the payer', () => {
  const payByPage = async () => {
    const session = await openSession(bed);
    const form = { email: 'ana@example.test', number: CARD, expiry: '12/31', code: '123', name: 'Ana' };
    return fetch(session.url ?? '', { method: 'POST', body: new URLSearchParams(form), redirect: 'manual' });
  };

  test('after the news · the receiver knows before the payer is sent on', async () => {
    await bed.control.set({ redirect: 'after_webhook' });
    const answer = await payByPage();
    expect([answer.status, ofType(COMPLETED).length]).toEqual([303, 1]);
  });

  test('before the news · the receiver hears of it only when the payer is on the way', async () => {
    await bed.control.set({ redirect: 'before_webhook' });
    const answer = await payByPage();
    expect([answer.status, ofType(COMPLETED).length]).toEqual([303, 0]);
    await heldLetGo();
    expect(ofType(COMPLETED)).toHaveLength(1);
  });

  async function heldLetGo(): Promise<void> {
    while (ofType(COMPLETED).length === 0) await bed.control.idle();
  }
});
