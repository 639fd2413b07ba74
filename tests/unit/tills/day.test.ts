import { describe, expect, test } from 'vitest';
import { minor } from '#domain/money/index';
import { type DayFacts, dayExceptions, mayClose, type Taking } from '#domain/tills/index';

const quiet: DayFacts = {
  tills: [{ name: 'Till 1', state: 'closed', differenceMinor: minor(0), reason: null }],
  takings: [],
  terminalReceipts: 0,
  batchEntered: false,
  refundsWaiting: { count: 0, amountMinor: minor(0) },
  approvalsWaiting: 0,
  quarantined: 0,
};

const till = (over: Partial<DayFacts['tills'][number]>): Partial<DayFacts> => ({
  tills: [{ name: 'Till 1', state: 'closed', differenceMinor: minor(0), reason: null, ...over }],
});
const taking = (tender: Taking['tender'], receipts: number, proof: number | null): Partial<DayFacts> => ({
  takings: [{ tender, receiptsMinor: minor(receipts), proofMinor: proof === null ? null : minor(proof) }],
});

describe('dayExceptions', () => {
  test('a quiet day · has none · and may be closed', () => {
    expect(dayExceptions(quiet)).toEqual([]);
    expect(mayClose([])).toBe(true);
  });
  test.each<[string, Partial<DayFacts>, string, boolean, number | null]>([
    ['a till not counted', till({ state: 'open', differenceMinor: null }), 'till_not_closed', true, null],
    ['a till counted and not closed', till({ state: 'counted' }), 'till_not_closed', true, null],
    ['a difference without a reason', till({ differenceMinor: minor(-200) }), 'till_difference', true, -200],
    [
      'a difference with its reason',
      till({ differenceMinor: minor(-200), reason: 'Coin lost' }),
      'till_difference',
      false,
      -200,
    ],
    ['card payments without a batch', { terminalReceipts: 11 }, 'batch_missing', true, null],
    ['a batch that differs', taking('card_machine', 921_600, 903_600), 'takings_differ', true, -18_000],
    ['online takings that differ', taking('online_card', 100, 150), 'takings_differ', true, 50],
    ['a lender that settles later', taking('lender', 139_000, null), 'proof_awaited', false, 139_000],
    [
      'a refund that waits',
      { refundsWaiting: { count: 1, amountMinor: minor(171_000) } },
      'refunds_waiting',
      false,
      171_000,
    ],
    ['approvals that wait', { approvalsWaiting: 2 }, 'approvals_waiting', false, null],
    ['an online payment that is not what was asked', { quarantined: 1 }, 'payment_quarantined', false, null],
  ])('%s', (_, over, code, blocking, amountMinor) => {
    const exceptions = dayExceptions({ ...quiet, ...over });
    expect(exceptions).toMatchObject([{ code, blocking, amountMinor }]);
    expect(mayClose(exceptions)).toBe(!blocking);
  });
  test.each<[string, Partial<DayFacts>]>([
    ['cash that differs is told by its till', taking('cash', 191_600, 191_400)],
    ['takings that tie', taking('card_machine', 921_600, 921_600)],
    ['nothing awaited of nothing taken', taking('cheque', 0, null)],
    ['a batch entered', { terminalReceipts: 11, batchEntered: true }],
  ])('%s · is no exception', (_, over) => {
    expect(dayExceptions({ ...quiet, ...over })).toEqual([]);
  });
  test('what holds up the close · among others · stands first', () => {
    const facts = {
      ...quiet,
      ...till({ differenceMinor: minor(5), reason: 'Found' }),
      terminalReceipts: 1,
      approvalsWaiting: 1,
    };
    expect(dayExceptions(facts).map(({ code, blocking }) => [code, blocking])).toEqual([
      ['batch_missing', true],
      ['till_difference', false],
      ['approvals_waiting', false],
    ]);
  });
});
