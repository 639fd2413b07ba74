import { describe, expect, test } from 'vitest';
import { takeRequestFault } from '#stand-ins/stripe-mock/api/request-faults';
import { createService, stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import { openStoreInMemory } from '#stand-ins/stripe-mock/state/log-file';

function serviceWithFault(order: { path?: string; nth?: number; times?: number }) {
  const { store } = openStoreInMemory();
  const service = createService(store, {
    secretKey: 'k',
    currency: 'eur',
    webhookUrl: null,
    webhookSecret: 's',
  });
  store.transact(() =>
    store.put('requestFaults', {
      ...stamp(service, newId('flt')),
      kind: 'delay',
      method: 'POST',
      path: '/v1/refunds',
      nth: 1,
      times: 1,
      delayMs: 0,
      seen: 0,
      ...order,
    }),
  );
  return (method: string, path: string) => takeRequestFault(service, method, path) !== null;
}

describe('takeRequestFault', () => {
  test.each([
    [{}, [true, false, false, false]],
    [{ nth: 3 }, [false, false, true, false]],
    [{ nth: 2, times: 2 }, [false, true, true, false]],
  ])('%j · hits these of four calls: %j', (order, hits) => {
    const take = serviceWithFault(order);
    expect(hits.map(() => take('POST', '/v1/refunds'))).toEqual(hits);
  });

  test('other methods and paths · neither hit nor counted', () => {
    const take = serviceWithFault({ nth: 2 });
    expect([
      take('GET', '/v1/refunds'),
      take('POST', '/v1/refunds/re_1'),
      take('POST', '/v1/refunds'),
    ]).toEqual([false, false, false]);
    expect(take('POST', '/v1/refunds')).toBe(true);
  });

  test('a star · is one segment, not more', () => {
    const take = serviceWithFault({ path: '/v1/refunds/*' });
    expect([take('POST', '/v1/refunds/re_1/cancel'), take('POST', '/v1/refunds/re_1')]).toEqual([
      false,
      true,
    ]);
  });
});
