import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type CancellationAsked, cancellationFigure, moveFee } from '#domain/cancellation/index';
import { minor } from '#domain/money/index';
import type { CancellationEvent, CancellationLadder } from '#domain/pricing/index';
import { clinicDate } from '#domain/time/index';
import { CASES } from '#tests/factories/cases';
import { anyDay } from '#tests/factories/entries';

const ladder: CancellationLadder = {
  id: 'ladder',
  reflectionDays: 7,
  rungs: [
    { id: 'early', minDaysBefore: 14, kept: { kind: 'amount', amountMinor: minor(10_000) } },
    { id: 'late', minDaysBefore: 7, kept: { kind: 'rate', rateBp: 1_000 } },
    { id: 'last', minDaysBefore: 0, kept: { kind: 'amount', amountMinor: minor(25_000) } },
  ],
  noShow: { kind: 'rate', rateBp: 5_000 },
  reschedule: { freeMoves: 2, fee: { kind: 'amount', amountMinor: minor(5_000) } },
};

const asked = (over: Partial<CancellationAsked> = {}): CancellationAsked => ({
  ladder,
  disclosedIn: 'quote LQ-0377, version 2',
  event: 'cancels',
  on: clinicDate('2026-03-12'),
  acceptedOn: clinicDate('2026-01-20'),
  eyes: [{ eye: 'OS', surgeryOn: clinicDate('2026-03-14'), shareMinor: minor(221_000) }],
  paidMinor: minor(499_000),
  staysMinor: minor(303_000),
  ...over,
});

const figure = (over: Partial<CancellationAsked>) => {
  const { keptMinor, comesBackMinor, stillOwedMinor, rows } = cancellationFigure(asked(over));
  return [keptMinor, comesBackMinor, stillOwedMinor, rows.map(({ by }) => by).join(' ')];
};

describe('cancellationFigure', () => {
  test('the left eye cancelled two days before · with its derivation · sends 1,710.00 back', () => {
    const result = cancellationFigure(asked());
    expect(result).toMatchObject({ keptMinor: 25_000, comesBackMinor: 171_000, stillOwedMinor: 0 });
    expect(result.why).toEqual({
      title: 'What comes back',
      steps: [
        { label: 'Paid', amountMinor: 499_000 },
        { label: 'Price of what stays', amountMinor: -303_000 },
        {
          label: 'Kept, left eye',
          text: '2 days before surgery',
          amountMinor: -25_000,
          rule: 'last',
          version: 'quote LQ-0377, version 2',
        },
        { label: 'Comes back', amountMinor: 171_000 },
      ],
      note: 'Shown to the patient with quote LQ-0377, version 2.',
    });
  });
  const day = clinicDate;
  const both = [
    { eye: 'OD' as const, surgeryOn: day('2026-03-14'), shareMinor: minor(250_000) },
    { eye: 'OS' as const, surgeryOn: day('2026-04-14'), shareMinor: minor(200_000) },
  ];
  test.each<[string, Partial<CancellationAsked>, [number, number, number, string]]>([
    ['seven days before', { on: day('2026-03-07') }, [22_100, 173_900, 0, 'late']],
    ['six days before', { on: day('2026-03-08') }, [25_000, 171_000, 0, 'last']],
    ['two weeks before', { on: day('2026-02-28') }, [10_000, 186_000, 0, 'early']],
    ['the last day to reflect', { on: day('2026-01-27') }, [0, 196_000, 0, 'reflection']],
    ['the day after', { on: day('2026-01-28') }, [10_000, 186_000, 0, 'early']],
    ['found unsuitable, however late', { event: 'unsuitable' }, [0, 196_000, 0, 'unsuitable']],
    ['the clinic cancels', { event: 'clinic_cancels' }, [0, 196_000, 0, 'clinic_cancels']],
    ['does not come', { event: 'no_show', on: day('2026-03-14') }, [110_500, 85_500, 0, 'no_show']],
    [
      'no day agreed',
      { eyes: [{ eye: 'OS', surgeryOn: null, shareMinor: minor(221_000) }] },
      [10_000, 186_000, 0, 'no_day'],
    ],
    [
      'never more than the eye’s share',
      { eyes: [{ eye: 'OS', surgeryOn: day('2026-03-14'), shareMinor: minor(20_000) }] },
      [20_000, 176_000, 0, 'last'],
    ],
    [
      'the whole course, each eye by its own day',
      { eyes: both, staysMinor: minor(0) },
      [35_000, 464_000, 0, 'last early'],
    ],
    [
      'only the deposit paid',
      { paidMinor: minor(49_900), staysMinor: minor(0) },
      [25_000, 24_900, 0, 'last'],
    ],
    ['less paid than stays', { paidMinor: minor(310_000) }, [25_000, 0, 18_000, 'last']],
  ])('%s', (_, over, expected) => {
    expect(figure(over)).toEqual(expected);
  });
  test('any cancellation · paid · is kept, stays or comes back, nothing twice', () => {
    const money = (max: number) => fc.nat({ max }).map(minor);
    const anyAsked = fc.record({
      event: fc.constantFrom<CancellationEvent>('cancels', 'no_show', 'unsuitable', 'clinic_cancels'),
      on: anyDay,
      surgeryOn: fc.option(anyDay),
      shareMinor: money(500_000),
      paidMinor: money(900_000),
      staysMinor: money(400_000),
    });
    fc.assert(
      fc.property(anyAsked, ({ event, on, surgeryOn, shareMinor, paidMinor, staysMinor }) => {
        const eyes = [{ eye: 'OD' as const, surgeryOn, shareMinor }];
        const result = cancellationFigure(asked({ event, on, eyes, paidMinor, staysMinor }));
        const { keptMinor, comesBackMinor, stillOwedMinor } = result;
        expect(paidMinor + stillOwedMinor).toBe(staysMinor + keptMinor + comesBackMinor);
        expect(comesBackMinor === 0 || stillOwedMinor === 0).toBe(true);
        expect(keptMinor <= shareMinor).toBe(true);
        if (event === 'unsuitable' || event === 'clinic_cancels') expect(keptMinor).toBe(0);
        const shown = result.why.steps
          .slice(0, -1)
          .reduce((total, step) => total + (step.amountMinor ?? 0), 0);
        expect(shown).toBe(comesBackMinor - stillOwedMinor);
      }),
      { numRuns: CASES },
    );
  });
});

describe('moveFee', () => {
  test.each([
    [0, 0],
    [1, 0],
    [2, 10_000],
    [9, 10_000],
  ])('after %i moves · another of both eyes · costs %i', (before, fee) => {
    expect(moveFee(ladder, before, [minor(200_000), minor(250_000)])).toBe(fee);
  });
  test('a fee · beyond an eye’s share · is the share', () => {
    expect(moveFee(ladder, 2, [minor(300)])).toBe(300);
  });
});
