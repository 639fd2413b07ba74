import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { currencyCode, minor } from '#domain/money/index';
import { refusedSteps, takeStep } from '#domain/state-machine';
import {
  checkTillClose,
  countCash,
  DAY,
  denominationsOf,
  shouldHold,
  TILL,
  type TillMovements,
  tillDifference,
} from '#domain/tills/index';
import { CASES } from '#tests/factories/cases';
import { EUR } from '#tests/factories/entries';

describe('countCash', () => {
  const euro = denominationsOf(EUR);
  test('a count by denomination · adds up · nothing counted is nothing', () => {
    expect(countCash(euro, { '5000': 20, '2000': 7, '200': 20, '1': 3 })).toEqual({
      ok: true,
      amountMinor: 118_003,
    });
    expect(countCash(euro, {})).toEqual({ ok: true, amountMinor: 0 });
  });
  test.each<[string, Record<string, number>]>([
    ['no such note', { '3000': 1 }],
    ['half a coin', { '100': 0.5 }],
    ['below nothing', { '100': -1 }],
    ['no number', { '100': Number.NaN }],
    ['written otherwise', { '0100': 1 }],
  ])('%s · is refused · naming the field', (_, count) => {
    const result = countCash(euro, count);
    expect(result.ok ? [] : result.refusals.map(({ field }) => field)).toEqual([
      `count.${Object.keys(count)[0]}`,
    ]);
  });
  test.each(['EUR', 'GBP', 'CHF', 'JPY', 'KWD', 'XAF', 'MAD', 'TND'])(
    '%s · any sum in its smallest coin · can be counted',
    (code) => {
      const list = denominationsOf(currencyCode(code));
      const values = list.map(({ valueMinor }) => valueMinor as number);
      expect(values).toEqual([...new Set(values)].sort((a, b) => b - a));
      const smallest = values.at(-1) ?? 0;
      fc.assert(
        fc.property(fc.nat({ max: 1_000_000 }), (steps) => {
          let left = steps * smallest;
          const count: Record<string, number> = {};
          for (const value of values) {
            const pieces = Math.min(Math.floor(left / value), 100_000);
            count[String(value)] = pieces;
            left -= pieces * value;
          }
          fc.pre(left === 0);
          expect(countCash(list, count)).toEqual({ ok: true, amountMinor: steps * smallest });
        }),
        { numRuns: 50 },
      );
    },
  );
});

describe('shouldHold', () => {
  const movements: TillMovements = {
    floatMinor: minor(20_000),
    openedAt: '08:40',
    receipts: { count: 6, cashMinor: minor(175_000), changeMinor: minor(4_400) },
    refunds: { count: 0, amountMinor: minor(0) },
    moves: [
      { kind: 'drop', amountMinor: minor(60_000), words: 'to the safe, 13:05' },
      { kind: 'paid_out', amountMinor: minor(2_200), words: 'courier' },
    ],
  };
  test('float, receipts, a drop and a courier · come to 1,284.00 · step by step', () => {
    expect(shouldHold(movements)).toEqual({
      amountMinor: 128_400,
      why: {
        title: 'Should hold',
        steps: [
          { label: 'Float at 08:40', amountMinor: 20_000 },
          { label: '6 cash receipts, less change', amountMinor: 170_600 },
          { label: 'Drop, to the safe, 13:05', amountMinor: -60_000 },
          { label: 'Paid out, courier', amountMinor: -2_200 },
          { label: 'Should hold', amountMinor: 128_400 },
        ],
      },
    });
    expect(tillDifference(minor(128_200), minor(128_400))).toBe(-200);
  });
  test('any shift · its steps · add up to what it should hold', () => {
    const money = fc.nat({ max: 500_000 }).map(minor);
    fc.assert(
      fc.property(
        money,
        fc.record({ count: fc.nat({ max: 3 }), cash: money, change: money }),
        fc.record({ count: fc.nat({ max: 2 }), amountMinor: money }),
        fc.array(
          fc.record({
            kind: fc.constantFrom('drop' as const, 'paid_out' as const),
            amountMinor: money,
            words: fc.string(),
          }),
        ),
        (floatMinor, receipts, refunds, moves) => {
          const none = minor(0);
          const { amountMinor, why } = shouldHold({
            floatMinor,
            openedAt: '08:00',
            receipts: {
              count: receipts.count,
              cashMinor: receipts.count === 0 ? none : receipts.cash,
              changeMinor: receipts.count === 0 ? none : receipts.change,
            },
            refunds: { count: refunds.count, amountMinor: refunds.count === 0 ? none : refunds.amountMinor },
            moves,
          });
          expect(why.steps.slice(0, -1).reduce((total, step) => total + (step.amountMinor ?? 0), 0)).toBe(
            amountMinor,
          );
        },
      ),
      { numRuns: CASES },
    );
  });
});

describe('lives of tills and days', () => {
  test.each([
    ...refusedSteps(TILL).map(([from, to]) => ['till', from, to] as const),
    ...refusedSteps(DAY).map(([from, to]) => ['day', from, to] as const),
  ])('a %s that is %s to %s · is refused · by name', (of, from, to) => {
    const step = takeStep(of === 'till' ? TILL : DAY, from, to);
    expect(step).toMatchObject({ ok: false, code: `${of}_${from}_to_${to}` });
  });
  test('a till · is counted, counted again and closed · and stays so', () => {
    expect(TILL.follows).toEqual({ open: ['counted'], counted: ['counted', 'open', 'closed'], closed: [] });
  });
  test('a day · is counted and closed · and may be opened again', () => {
    expect(DAY.follows).toEqual({ open: ['counted'], counted: ['open', 'closed'], closed: ['open'] });
  });
});

describe('checkTillClose', () => {
  const sound = {
    state: 'counted',
    differenceMinor: minor(0),
    reason: null,
    countedBy: 1,
    closedBy: 2,
  } as const;
  const codes = (over: Partial<Parameters<typeof checkTillClose>[0]>) =>
    checkTillClose({ ...sound, ...over }).map(({ code }) => code);
  test('a till · is closed · counted, explained and by another person', () => {
    expect(codes({})).toEqual([]);
    expect(codes({ differenceMinor: minor(-200), reason: 'A coin under the drawer' })).toEqual([]);
    expect(codes({ differenceMinor: minor(-200) })).toEqual(['reason_missing']);
    expect(codes({ differenceMinor: minor(3), reason: '  ' })).toEqual(['reason_missing']);
    expect(codes({ closedBy: 1 })).toEqual(['same_person']);
    expect(codes({ state: 'open', countedBy: null })).toEqual(['not_counted']);
    expect(codes({ state: 'closed' })).toEqual(['not_counted']);
  });
});
