import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  type CarePeriod,
  guaranteeOf,
  type StatementRow,
  shareFee,
  statementTotals,
  type WithholdingRule,
  withhold,
} from '#domain/fees/index';
import { type Minor, minor } from '#domain/money/index';
import { clinicDate } from '#domain/time/index';
import { CASES } from '#tests/factories/cases';

const m = minor;
const anyMoney = fc.nat({ max: 2_000_000 }).map(m);

describe('statementTotals', () => {
  test('the month of the picture · adds up · as the phone shows it', () => {
    const eyes = Array.from(
      { length: 39 },
      (_, index): StatementRow => ({
        kind: 'surgery',
        amountMinor: m(index < 31 ? 48_000 : 47_125),
      }),
    );
    const rows: StatementRow[] = [
      ...eyes,
      { kind: 'enhancement', amountMinor: m(22_500) },
      { kind: 'enhancement', amountMinor: m(22_500) },
      { kind: 'clawback', amountMinor: m(-45_000) },
    ];
    const totals = statementTotals({ openingMinor: m(0), rows, withheldMinor: m(186_500), paidMinor: m(0) });
    expect(totals.feesMinor).toBe(1_865_000);
    expect(totals.closingMinor).toBe(1_678_500);
    expect(totals.why.steps).toEqual([
      { label: 'Brought forward', amountMinor: 0 },
      { label: '39 eyes', amountMinor: 1_865_000 },
      { label: '2 enhancements', amountMinor: 45_000 },
      { label: '1 clawed back', amountMinor: -45_000 },
      { label: 'Withheld', amountMinor: -186_500 },
      { label: 'Closing', amountMinor: 1_678_500 },
    ]);
  });
  test('any rows · steps · add up to the closing', () => {
    const anyRow = fc.record({
      kind: fc.constantFrom('surgery', 'enhancement', 'clawback', 'adjustment', 'guarantee' as const),
      amountMinor: fc.integer({ min: -500_000, max: 500_000 }).map(m),
    }) as fc.Arbitrary<StatementRow>;
    fc.assert(
      fc.property(
        anyMoney,
        fc.array(anyRow, { maxLength: 20 }),
        anyMoney,
        anyMoney,
        (openingMinor, rows, withheldMinor, paidMinor) => {
          const { why, closingMinor } = statementTotals({ openingMinor, rows, withheldMinor, paidMinor });
          const shown = why.steps.slice(0, -1).reduce((total, step) => total + (step.amountMinor ?? 0), 0);
          expect(shown).toBe(closingMinor);
          expect(why.steps.at(-1)?.amountMinor).toBe(closingMinor);
        },
      ),
      { numRuns: CASES },
    );
  });
});

describe('withhold', () => {
  const rule = (over: Partial<WithholdingRule> = {}): WithholdingRule => ({
    from: clinicDate('2025-04-01'),
    rateBp: 1_000,
    yearlyThresholdMinor: m(50_000),
    onceOver: 'excess',
    ...over,
  });
  const on = clinicDate('2026-03-01');
  const now = (rules: WithholdingRule[], fees: number, before: number, taxed: number) =>
    withhold(rules, on, m(fees), { feesMinor: m(before), taxedMinor: m(taxed) }).withheldMinor;
  test.each<[string, number, number]>([
    ['no rule in force', now([rule({ from: clinicDate('2027-01-01') })], 90_000, 0, 0), 0],
    ['no threshold', now([rule({ yearlyThresholdMinor: null })], 1_005, 0, 0), 101],
    [
      'the newest rule in force',
      now(
        [rule({ yearlyThresholdMinor: null }), rule({ from: on, rateBp: 500, yearlyThresholdMinor: null })],
        1_000,
        0,
        0,
      ),
      50,
    ],
    ['the excess once over', now([rule()], 30_000, 40_000, 0), 2_000],
    ['the excess going on', now([rule()], 10_000, 70_000, 20_000), 1_000],
    ['a month taken back', now([rule({ yearlyThresholdMinor: null })], -10_000, 60_000, 60_000), 0],
    [
      'a month after one taken back',
      now([rule({ yearlyThresholdMinor: null })], 25_000, 50_000, 60_000),
      1_500,
    ],
  ])('%s', (_, withheld, expected) => {
    expect(withheld).toBe(expected);
  });
  test('any months of fees · without clawbacks · are taxed in the end as one sum would be', () => {
    fc.assert(
      fc.property(
        fc.array(anyMoney, { minLength: 1, maxLength: 12 }),
        fc.constantFrom('excess' as const, 'whole_year' as const),
        fc.option(anyMoney),
        (months, onceOver, yearlyThresholdMinor) => {
          const rules = [rule({ onceOver, yearlyThresholdMinor })];
          let fees = 0;
          let taxed = 0;
          for (const month of months) {
            taxed += withhold(rules, on, month, { feesMinor: m(fees), taxedMinor: m(taxed) }).baseMinor;
            fees += month;
          }
          const atOnce = withhold(rules, on, m(fees), { feesMinor: m(0), taxedMinor: m(0) }).baseMinor;
          expect(taxed).toBe(atOnce);
        },
      ),
      { numRuns: CASES },
    );
  });
});

describe('guaranteeOf', () => {
  const carried = { leastMinor: m(300_000), shortfall: 'carried' } as const;
  const forgiven = { leastMinor: m(300_000), shortfall: 'forgiven' } as const;
  test.each<[string, ReturnType<typeof guaranteeOf>, [number, number, number]]>([
    ['a thin month is filled up and carried', guaranteeOf(carried, m(200_000), m(0)), [100_000, 0, 100_000]],
    ['a good month pays back what it can', guaranteeOf(carried, m(340_000), m(100_000)), [0, 40_000, 60_000]],
    ['a very good month pays back all', guaranteeOf(carried, m(900_000), m(60_000)), [0, 60_000, 0]],
    ['a month at the guarantee moves nothing', guaranteeOf(carried, m(300_000), m(60_000)), [0, 0, 60_000]],
    ['forgiven, a good month pays nothing back', guaranteeOf(forgiven, m(900_000), m(0)), [0, 0, 0]],
    ['forgiven, a thin month is filled up', guaranteeOf(forgiven, m(1), m(0)), [299_999, 0, 0]],
  ])('%s', (_, { topUpMinor, recoveredMinor, carriedMinor }, expected) => {
    expect([topUpMinor, recoveredMinor, carriedMinor]).toEqual(expected);
  });
  test('any months · what was filled up · is recovered or still carried, and no month falls below', () => {
    fc.assert(
      fc.property(fc.array(anyMoney, { maxLength: 24 }), (months) => {
        let open: Minor = m(0);
        let given = 0;
        for (const earned of months) {
          const month = guaranteeOf(carried, earned, open);
          given += month.topUpMinor - month.recoveredMinor;
          open = month.carriedMinor;
          expect(earned + month.topUpMinor - month.recoveredMinor >= carried.leastMinor).toBe(true);
          expect(open).toBe(given);
        }
      }),
      { numRuns: CASES },
    );
  });
});

describe('shareFee', () => {
  const terms = { careRateBp: 2_000, days: 90 };
  test('any care that does not overlap · shares the fee whole · in the order of days', () => {
    fc.assert(
      fc.property(
        anyMoney,
        fc.uniqueArray(fc.integer({ min: 1, max: 90 }), { minLength: 0, maxLength: 6 }),
        (fee, marks) => {
          const edges = [...marks].sort((a, b) => a - b);
          const periods: CarePeriod[] = [];
          for (let index = 0; index + 1 < edges.length; index += 2)
            periods.push({ payeeId: index, fromDay: edges[index] ?? 0, toDay: edges[index + 1] ?? 0 });
          const shared = shareFee(fee, terms, periods);
          expect(shared.ok).toBe(true);
          if (!shared.ok) return;
          const others = shared.providers.reduce((total, { amountMinor }) => total + amountMinor, 0);
          expect(shared.surgeonMinor + others).toBe(fee);
          expect(others <= Math.round(fee / 5) + 1).toBe(true);
        },
      ),
      { numRuns: CASES },
    );
  });
  test.each<[string, CarePeriod[], string]>([
    ['before the first day', [{ payeeId: 1, fromDay: 0, toDay: 5 }], 'periods.0'],
    ['after the last', [{ payeeId: 1, fromDay: 1, toDay: 91 }], 'periods.0'],
    ['backwards', [{ payeeId: 1, fromDay: 9, toDay: 8 }], 'periods.0'],
    [
      'two on one day',
      [
        { payeeId: 2, fromDay: 8, toDay: 9 },
        { payeeId: 1, fromDay: 1, toDay: 8 },
      ],
      'periods.0',
    ],
  ])('care %s · is refused · naming it', (_, periods, field) => {
    expect(shareFee(m(45_000), terms, periods)).toMatchObject({ ok: false, field });
  });
});
