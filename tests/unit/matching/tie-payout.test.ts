import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type BalanceMovement, type KnownSource, tiePayout } from '#domain/matching/index';
import { minor } from '#domain/money/index';
import { CASES } from '#tests/factories/cases';

let serial = 0;
const movement = (category: string, sourceId: string | null, amount: number, fee = 0): BalanceMovement => {
  serial += 1;
  return {
    id: `txn_${serial}`,
    category,
    sourceId,
    amountMinor: minor(amount),
    feeMinor: minor(fee),
    netMinor: minor(amount - fee),
  };
};
const known = (kind: KnownSource['kind'], sourceId: string, amount: number, ourId = 1): KnownSource => ({
  kind,
  sourceId,
  ourId,
  amountMinor: minor(amount),
});

describe('tiePayout', () => {
  const books = [
    known('receipt', 'ch_1', 49_900, 11),
    known('receipt', 'ch_2', 449_100, 12),
    known('refund', 're_1', -20_000, 21),
    known('dispute', 'dp_1', -49_900, 31),
  ];
  const movements = [
    movement('charge', 'ch_1', 49_900, 774),
    movement('charge', 'ch_2', 449_100, 6_762),
    movement('refund', 're_1', -20_000),
    movement('dispute', 'dp_1', -49_900, 2_000),
    movement('fee', null, -500),
    movement('payout', 'po_1', -419_064),
  ];
  test('charges, a refund, a dispute and fees · add up · to what was paid out', () => {
    const tie = tiePayout(minor(419_064), movements, books);
    expect(tie).toMatchObject({
      grossMinor: 499_000,
      refundsMinor: -20_000,
      disputesMinor: -49_900,
      feesMinor: -10_036,
      otherMinor: 0,
      netMinor: 419_064,
      differenceMinor: 0,
      leftovers: [],
      ties: true,
    });
    expect(tie.tied.map(({ to }) => ('ourId' in to ? `${to.kind} ${to.ourId}` : to.kind))).toEqual([
      'receipt 11',
      'receipt 12',
      'refund 21',
      'dispute 31',
      'fee',
    ]);
  });
  test('a payout of another amount · shows · the difference', () => {
    expect(tiePayout(minor(419_000), movements, books)).toMatchObject({
      differenceMinor: -64,
      ties: false,
      leftovers: [],
    });
  });
  test('a refund that failed and a dispute won · come back · with the sign turned', () => {
    const back = [movement('refund_failure', 're_1', 20_000), movement('dispute_reversal', 'dp_1', 49_900)];
    expect(tiePayout(minor(69_900), back, books).ties).toBe(true);
  });
  test.each<[string, BalanceMovement, string]>([
    ['a charge nobody knows', movement('charge', 'ch_9', 100), 'unknown_source'],
    ['a charge of another amount', movement('charge', 'ch_1', 49_901), 'amount_differs'],
    ['a charge with the sign turned', movement('charge', 'ch_1', -49_900), 'amount_differs'],
    ['a refund that failed by another amount', movement('refund_failure', 're_1', 19_999), 'amount_differs'],
    ['a refund that names a charge', movement('refund', 'ch_1', 49_900), 'unknown_source'],
    ['a charge of nothing', movement('charge', null, 100), 'no_source'],
    ['a category without a name', movement('topup', 'tu_1', 100), 'unknown_category'],
    [
      'a net that is not amount less fee',
      { ...movement('charge', 'ch_1', 49_900, 774), netMinor: minor(49_900) },
      'net_is_not_amount_less_fee',
    ],
  ])('%s · is left over · and named', (_, odd, reason) => {
    const tie = tiePayout(odd.netMinor, [odd], books);
    expect(tie.leftovers).toEqual([{ movementId: odd.id, netMinor: odd.netMinor, reason }]);
    expect(tie.ties).toBe(false);
  });
  test('any movements · columns · add up to net, and each movement is tied or left over once', () => {
    const anyMovement = fc
      .record({
        category: fc.constantFrom(
          'charge',
          'refund',
          'refund_failure',
          'dispute',
          'dispute_reversal',
          'fee',
          'topup',
        ),
        source: fc.constantFrom('ch_1', 'ch_2', 're_1', 'dp_1', null),
        amount: fc.integer({ min: -500_000, max: 500_000 }),
        fee: fc.nat({ max: 9_000 }),
      })
      .map(({ category, source, amount, fee }) => movement(category, source, amount, fee));
    fc.assert(
      fc.property(
        fc.array(anyMovement, { maxLength: 12 }),
        fc.integer({ min: -1e6, max: 1e6 }),
        (list, paid) => {
          const tie = tiePayout(minor(paid), [...list, movement('payout', 'po_1', -paid)], books);
          expect(tie.grossMinor + tie.refundsMinor + tie.disputesMinor + tie.feesMinor + tie.otherMinor).toBe(
            tie.netMinor,
          );
          expect(tie.netMinor + tie.differenceMinor).toBe(paid);
          const seen = [...tie.tied, ...tie.leftovers].map(({ movementId }) => movementId).sort();
          expect(seen).toEqual(list.map(({ id }) => id).sort());
        },
      ),
      { numRuns: CASES },
    );
  });
});
