import { describe, expect, test } from 'vitest';
import type { CustomerRecord } from '#stand-ins/stripe-mock/state/records';
import { type Change, Store } from '#stand-ins/stripe-mock/state/store';

const customer = (id: string, seq: number, name = id): CustomerRecord => ({
  id,
  seq,
  created: 0,
  email: null,
  name,
  description: null,
  phone: null,
  metadata: {},
});

function openStore(saved: Change[] = []) {
  const written: (readonly Change[])[] = [];
  const store = new Store(saved, (changes) => written.push(changes));
  return { store, written };
}

describe('A transaction', () => {
  test('done · is written whole, each record once, in its last version', () => {
    const { store, written } = openStore();
    store.transact(() => {
      store.put('customers', customer('a', 1, 'first'));
      store.put('customers', customer('b', 2));
      store.put('customers', customer('a', 1, 'second'));
    });
    expect(written).toEqual([
      [
        { kind: 'customers', id: 'a', record: customer('a', 1, 'second') },
        { kind: 'customers', id: 'b', record: customer('b', 2) },
      ],
    ]);
  });

  test('broken off · leaves nothing behind: not what it put, changed or removed', () => {
    const { store, written } = openStore();
    store.transact(() => store.put('customers', customer('a', 1)));
    const fails = () =>
      store.transact(() => {
        store.put('customers', customer('a', 1, 'changed'));
        store.remove('customers', 'a');
        store.put('customers', customer('b', 2));
        throw new Error('broken off');
      });
    expect(fails).toThrow('broken off');
    expect(store.all('customers')).toEqual([customer('a', 1)]);
    expect(written).toHaveLength(1);
  });

  test('that cannot be written · has not happened', () => {
    const store = new Store([], () => {
      throw new Error('disk full');
    });
    expect(() => store.transact(() => store.put('customers', customer('a', 1)))).toThrow('disk full');
    expect(store.all('customers')).toEqual([]);
  });

  test('within another · belongs to it', () => {
    const { store, written } = openStore();
    store.transact(() => store.transact(() => store.put('customers', customer('a', 1))));
    expect(written).toHaveLength(1);
  });

  test('none open · nothing can be changed', () => {
    const { store } = openStore();
    expect(() => store.put('customers', customer('a', 1))).toThrow('transaction');
    expect(() => store.remove('customers', 'a')).toThrow('transaction');
  });

  test('nothing changed · nothing written', () => {
    const { store, written } = openStore();
    store.transact(() => store.all('customers'));
    expect(written).toEqual([]);
  });
});

describe('A store opened again', () => {
  test('from all that was written · is the same, and counts on', () => {
    const { store, written } = openStore();
    store.transact(() => {
      store.put('customers', customer('a', store.nextSeq()));
      store.put('customers', customer('b', store.nextSeq()));
    });
    store.transact(() => store.remove('customers', 'a'));
    const again = openStore(written.flat()).store;
    expect(again.snapshot()).toEqual(store.snapshot());
    expect(again.nextSeq()).toBe(3);
  });
});
