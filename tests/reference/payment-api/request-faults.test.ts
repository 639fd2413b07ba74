import type Stripe from 'stripe';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { TestBed } from './test-bed.ts';
import { errorOf, openTestBed, sdkFor, sessionParameters } from './test-bed.ts';

// Source: measured with the official SDK 23.1.0 and its own HTTP client.

let bed: TestBed;
let stripe: Stripe;
beforeEach(async () => {
  bed = await openTestBed();
  stripe = sdkFor(bed.mock);
});
afterEach(() => bed.close());

const PATH = '/v1/checkout/sessions';
const KEY = { idempotencyKey: 'attempt-1' };
const create = (options: Stripe.RequestOptions = {}, client = stripe) =>
  client.checkout.sessions.create(sessionParameters(), { ...KEY, ...options });
const sessionIds = async () => (await bed.control.dump()).state.sessions.map(({ id }) => id);
const callsMade = async () => (await bed.control.requests()).filter(({ path }) => path === PATH).length;

describe('The answer is lost after the work was done', () => {
  test('hang · the caller times out, the session exists, the same key finds it', async () => {
    await bed.control.addFault({ path: PATH, kind: 'commit_then_hang' });
    const error = await errorOf(create({ timeout: 300 }));
    expect(error.type).toBe('StripeConnectionError');
    const [made] = await sessionIds();
    expect((await create()).id).toBe(made);
    expect(await sessionIds()).toHaveLength(1);
  });

  test('reset · the SDK tries once more by itself, under the same key', async () => {
    await bed.control.addFault({ path: PATH, kind: 'commit_then_reset' });
    const session = await create();
    expect(await sessionIds()).toEqual([session.id]);
    const calls = await bed.control.requests();
    expect(calls.map(({ fault, replayed }) => [fault, replayed])).toEqual([
      ['commit_then_reset', false],
      [null, true],
    ]);
  });

  test('reset twice · the caller hears of it', async () => {
    await bed.control.addFault({ path: PATH, kind: 'commit_then_reset', times: 2 });
    expect((await errorOf(create())).type).toBe('StripeConnectionError');
    expect((await create()).id).toBe((await sessionIds())[0]);
  });

  test('cut short · never tried again by the SDK; the same key finds the session', async () => {
    await bed.control.addFault({ path: PATH, kind: 'commit_then_truncate' });
    await expect(create({}, sdkFor(bed.mock, { maxNetworkRetries: 2 }))).rejects.toThrow();
    expect(await callsMade()).toBe(1);
    expect((await create()).id).toBe((await sessionIds())[0]);
  });
});

describe('The answer is an error', () => {
  test('429 and 409 · told to the caller when retries are off', async () => {
    await bed.control.addFault({ path: PATH, kind: 'rate_limit_429' });
    expect((await errorOf(create())).statusCode).toBe(429);
    await bed.control.addFault({ path: PATH, kind: 'conflict_409' });
    const conflict = await errorOf(create());
    expect([conflict.statusCode, conflict.code]).toEqual([409, 'lock_timeout']);
    expect(await sessionIds()).toEqual([]);
    expect((await create()).status).toBe('open');
  });

  test('500 before the work · the SDK’s own retry succeeds', async () => {
    await bed.control.addFault({ path: PATH, kind: 'error_500_before' });
    expect((await create({}, sdkFor(bed.mock, { maxNetworkRetries: 2 }))).status).toBe('open');
    expect(await callsMade()).toBe(2);
  });

  test('500 stored · every retry gets it again', async () => {
    await bed.control.addFault({ path: PATH, kind: 'error_500_stored' });
    const error = await errorOf(create({}, sdkFor(bed.mock, { maxNetworkRetries: 2 })));
    expect(error.statusCode).toBe(500);
    expect((await bed.control.requests()).map(({ replayed }) => replayed)).toEqual([false, true, true]);
  });
});

describe('Which call is hit', () => {
  test('the second of three · only that', async () => {
    await bed.control.addFault({ path: PATH, kind: 'error_500_before', nth: 2 });
    const outcomes: string[] = [];
    for (const key of ['a', 'b', 'c']) {
      outcomes.push(
        await create({ idempotencyKey: key }).then(
          ({ status }) => String(status),
          () => 'failed',
        ),
      );
    }
    expect(outcomes).toEqual(['open', 'failed', 'open']);
  });

  test('another path or method · left alone; a star · any one segment', async () => {
    await bed.control.addFault({ path: `${PATH}/*/expire`, kind: 'error_500_before' });
    await bed.control.addFault({ path: '/v1/balance', method: 'GET', kind: 'error_500_before' });
    const { id } = await create();
    expect((await errorOf(stripe.checkout.sessions.expire(id))).statusCode).toBe(500);
    expect((await errorOf(stripe.balance.retrieve())).statusCode).toBe(500);
    expect((await stripe.checkout.sessions.expire(id)).status).toBe('expired');
  });

  test('cleared · nothing is hit', async () => {
    await bed.control.addFault({ path: PATH, kind: 'error_500_before', times: 9 });
    await bed.control.clearFaults();
    expect((await create()).status).toBe('open');
  });

  test('an order that cannot be · refused by name', async () => {
    await expect(bed.control.addFault({ path: '/nowhere', kind: 'delay' })).rejects.toThrow(/^path:/);
  });
});
