import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { allocateRefund, REFUND_ORDER, type TakenTender } from '#domain/cancellation/index';
import { minor } from '#domain/money/index';
import { TENDERS, type Tender } from '#domain/payments/index';
import { clinicDate } from '#domain/time/index';
import { CASES } from '#tests/factories/cases';
import { anyDay } from '#tests/factories/entries';

let serial = 0;
const taken = (tender: Tender, amount: number, over: Partial<TakenTender> = {}): TakenTender => {
  serial += 1;
  return {
    receiptTenderId: serial,
    tender,
    takenOn: clinicDate('2026-03-01'),
    takenMinor: minor(amount),
    returnedMinor: minor(0),
    disputed: false,
    ...over,
  };
};

describe('allocateRefund', () => {
  test('card and lender · take back 1,710.00 · the card first', () => {
    const result = allocateRefund(minor(171_000), [taken('lender', 139_000), taken('online_card', 121_000)]);
    expect(result.ok && result.parts.map(({ tender, amountMinor }) => [tender, amountMinor])).toEqual([
      ['online_card', 121_000],
      ['lender', 50_000],
    ]);
  });
  test('one tender twice · gives back · the newest first, what was returned before aside', () => {
    const older = taken('card_machine', 500, { takenOn: clinicDate('2026-02-01') });
    const newer = taken('card_machine', 400, { returnedMinor: minor(150) });
    const result = allocateRefund(minor(300), [older, newer]);
    expect(
      result.ok && result.parts.map(({ receiptTenderId, amountMinor }) => [receiptTenderId, amountMinor]),
    ).toEqual([
      [newer.receiptTenderId, 250],
      [older.receiptTenderId, 50],
    ]);
  });
  test.each<[string, number, TakenTender[], string, number]>([
    ['nothing', 0, [taken('cash', 100)], 'nothing_to_refund', 100],
    ['below nothing', -1, [taken('cash', 100)], 'nothing_to_refund', 100],
    ['more than was taken', 101, [taken('cash', 100)], 'more_than_is_left', 100],
    [
      'what went back before',
      51,
      [taken('cash', 100, { returnedMinor: minor(50) })],
      'more_than_is_left',
      50,
    ],
    [
      'a payment in dispute',
      150,
      [taken('cash', 100), taken('online_card', 100, { disputed: true })],
      'waits_for_dispute',
      100,
    ],
  ])('%s · is refused · with the most that could go back', (_, amount, tenders, code, most) => {
    expect(allocateRefund(minor(amount), tenders)).toMatchObject({ ok: false, code, mostMinor: most });
  });
  test('the order of refunds · names every tender · once', () => {
    expect([...REFUND_ORDER].sort()).toEqual([...TENDERS].sort());
  });
  test('any refund · is shared out whole · never more to a tender than is left of it, nor out of turn (invariant 9)', () => {
    const anyTaken = fc
      .record({
        tender: fc.constantFrom(...TENDERS),
        takenOn: anyDay,
        takenMinor: fc.nat({ max: 300_000 }).map(minor),
        returned: fc.nat({ max: 100 }),
        disputed: fc.boolean(),
      })
      .map(({ returned, ...rest }) =>
        taken(rest.tender, 0, {
          ...rest,
          returnedMinor: minor(Math.floor((rest.takenMinor * returned) / 100)),
        }),
      );
    fc.assert(
      fc.property(
        fc.array(anyTaken, { maxLength: 6 }),
        fc.integer({ min: 1, max: 600_000 }),
        (tenders, amount) => {
          const left = (each: TakenTender) => (each.disputed ? 0 : each.takenMinor - each.returnedMinor);
          const most = tenders.reduce((total, each) => total + left(each), 0);
          const result = allocateRefund(minor(amount), tenders);
          expect(result.ok).toBe(amount <= most);
          if (!result.ok) return;
          expect(result.parts.reduce((total, { amountMinor }) => total + amountMinor, 0)).toBe(amount);
          for (const part of result.parts) {
            const from = tenders.find(({ receiptTenderId }) => receiptTenderId === part.receiptTenderId);
            expect(from && part.amountMinor > 0 && part.amountMinor <= left(from)).toBe(true);
          }
          const turns = result.parts.map(({ tender }) => REFUND_ORDER.indexOf(tender));
          expect(turns).toEqual([...turns].sort((a, b) => a - b));
        },
      ),
      { numRuns: CASES },
    );
  });
});
