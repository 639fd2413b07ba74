import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { TestBed } from './test-bed.ts';
import { DAY_MS, errorOf, openSession, openTestBed, sdkFor, sessionParameters } from './test-bed.ts';

// Source: the service's published page on idempotent requests, and the official SDK's error classes.

let bed: TestBed;
beforeEach(async () => {
  bed = await openTestBed();
});
afterEach(() => bed.close());

const KEY = { idempotencyKey: 'attempt-1' };
const sessionsMade = async () => (await bed.control.dump()).state.sessions.length;

describe('The same key again', () => {
  test('same parameters · the first answer, marked as repeated, and nothing new', async () => {
    const sdk = sdkFor(bed.mock);
    const first = await sdk.checkout.sessions.create(sessionParameters(), KEY);
    const second = await sdk.checkout.sessions.create(sessionParameters(), KEY);
    expect(second.id).toBe(first.id);
    expect(second.lastResponse.headers['idempotent-replayed']).toBe('true');
    expect(first.lastResponse.headers['idempotent-replayed']).toBeUndefined();
    expect(second.lastResponse.requestId).not.toBe(first.lastResponse.requestId);
    expect(await sessionsMade()).toBe(1);
  });

  test('the object has changed since · still the first answer', async () => {
    const { id } = await openSession(bed, {}, KEY);
    await bed.stripe.checkout.sessions.expire(id);
    expect((await openSession(bed, {}, KEY)).status).toBe('open');
  });

  test('other parameters · refused as a mistake', async () => {
    await openSession(bed, { amount: 10_000 }, KEY);
    const error = await errorOf(openSession(bed, { amount: 20_000 }, KEY));
    expect([error.statusCode, error.type, error.rawType]).toEqual([
      400,
      'StripeIdempotencyError',
      'idempotency_error',
    ]);
    expect(await sessionsMade()).toBe(1);
  });

  test('another call · refused as a mistake', async () => {
    const { id } = await openSession(bed, {}, KEY);
    const error = await errorOf(bed.stripe.checkout.sessions.expire(id, {}, KEY));
    expect(error.rawType).toBe('idempotency_error');
    expect((await bed.stripe.checkout.sessions.retrieve(id)).status).toBe('open');
  });

  test('just under a day later · remembered; a day later · a new session', async () => {
    const first = await openSession(bed, {}, KEY);
    await bed.control.advanceClock(DAY_MS - 1);
    expect((await openSession(bed, {}, KEY)).id).toBe(first.id);
    await bed.control.advanceClock(1);
    expect((await openSession(bed, {}, KEY)).id).not.toBe(first.id);
  });

  test('no key · two sessions', async () => {
    await openSession(bed, {}, { idempotencyKey: 'a' });
    await openSession(bed, {}, { idempotencyKey: 'b' });
    expect(await sessionsMade()).toBe(2);
  });
});

describe('Errors and keys', () => {
  const create = { method: 'POST', path: '/v1/checkout/sessions' } as const;

  test('a stored 500 · is given again, and the work is never done under that key', async () => {
    await bed.control.addFault({ ...create, kind: 'error_500_stored' });
    const first = await errorOf(openSession(bed, {}, KEY));
    const second = await errorOf(openSession(bed, {}, KEY));
    expect([first.statusCode, second.statusCode]).toEqual([500, 500]);
    expect(second.headers?.['idempotent-replayed']).toBe('true');
    expect(await sessionsMade()).toBe(0);
    expect((await openSession(bed, {}, { idempotencyKey: 'attempt-2' })).status).toBe('open');
  });

  test('a 500 before the work · the key stays free', async () => {
    await bed.control.addFault({ ...create, kind: 'error_500_before' });
    expect((await errorOf(openSession(bed, {}, KEY))).statusCode).toBe(500);
    expect((await openSession(bed, {}, KEY)).status).toBe('open');
  });

  test('a refusal by the state of things · is given again even after the state has changed', async () => {
    const { id } = await openSession(bed);
    const refund = () => bed.stripe.refunds.create({ charge: 'ch_none' }, KEY);
    expect((await errorOf(refund())).statusCode).toBe(404);
    await bed.control.pay(id);
    expect((await errorOf(refund())).headers?.['idempotent-replayed']).toBe('true');
  });

  test('parameters that cannot be read · keep no key, so the corrected call may use it', async () => {
    const error = await errorOf(openSession(bed, { client_reference_id: 'x'.repeat(201) }, KEY));
    expect(error.statusCode).toBe(400);
    expect((await openSession(bed, {}, KEY)).status).toBe('open');
  });

  test('429 · comes before the key is looked at', async () => {
    const first = await openSession(bed, {}, KEY);
    await bed.control.addFault({ ...create, kind: 'rate_limit_429' });
    const error = await errorOf(openSession(bed, {}, KEY));
    expect([error.statusCode, error.type]).toEqual([429, 'StripeRateLimitError']);
    expect((await openSession(bed, {}, KEY)).id).toBe(first.id);
  });

  test('401 · comes before the key is looked at', async () => {
    const stranger = sdkFor(bed.mock, {}, 'sk_test_somebody_else');
    const error = await errorOf(stranger.checkout.sessions.create(sessionParameters(), KEY));
    expect([error.statusCode, error.type]).toEqual([401, 'StripeAuthenticationError']);
    expect((await openSession(bed, {}, KEY)).status).toBe('open');
  });

  test('the first call is still in flight · 409, and once it is answered the first answer', async () => {
    await bed.control.addFault({ ...create, kind: 'delay', delayMs: 2_000 });
    const first = openSession(bed, {}, KEY);
    await firstCallIsIn();
    const error = await errorOf(openSession(bed, {}, KEY));
    expect([error.statusCode, error.code]).toEqual([409, 'idempotency_key_in_use']);
    const { id } = await first;
    expect((await openSession(bed, {}, KEY)).id).toBe(id);
    expect(await sessionsMade()).toBe(1);
  });

  /** Resolves when the stand-in has recorded the call that it is still working on. */
  async function firstCallIsIn(): Promise<void> {
    while ((await bed.control.requests()).length === 0)
      await new Promise((resolve) => setTimeout(resolve, 5));
  }
});

describe('What a change tells of its cause', () => {
  test('by an API call · the event names request and key; by the queue · neither', async () => {
    const { id } = await openSession(bed);
    const expired = await bed.stripe.checkout.sessions.expire(id, {}, { idempotencyKey: 'expire-1' });
    const [byCall] = (await bed.stripe.events.list({ limit: 1 })).data;
    expect(byCall?.request).toEqual({ id: expired.lastResponse.requestId, idempotency_key: 'expire-1' });
    await openSession(bed);
    await bed.control.advanceClock(DAY_MS);
    const [byQueue] = (await bed.stripe.events.list({ limit: 1 })).data;
    expect([byQueue?.type, byQueue?.request]).toEqual(['checkout.session.expired', null]);
  });
});
