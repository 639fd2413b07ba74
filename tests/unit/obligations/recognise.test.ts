import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { minor } from '#domain/money/index';
import {
  allocateByPolicy,
  type PromisePart,
  reallocate,
  recognise,
  runOff,
  unrecognised,
} from '#domain/obligations/index';
import { clinicDate } from '#domain/time/index';
import { CASES } from '#tests/factories/cases';
import { anyDay } from '#tests/factories/entries';

const done = clinicDate('2026-02-06');
const part = (id: string, standAlone: number, allocated: number, delivered = false): PromisePart => ({
  id,
  standAloneMinor: minor(standAlone),
  allocatedMinor: minor(allocated),
  recognisedOn: delivered ? done : null,
});

/** The worked package: 4,990.00 over 150 / 2,400 / 2,400 / 300 / 180. */
const promises = [
  { kind: 'assessment', standAloneMinor: minor(15_000) },
  { kind: 'surgery', standAloneMinor: minor(240_000) },
  { kind: 'surgery', standAloneMinor: minor(240_000) },
  { kind: 'aftercare', standAloneMinor: minor(30_000) },
  { kind: 'enhancement', standAloneMinor: minor(18_000) },
];

describe('allocateByPolicy', () => {
  test('the worked package · by both policies · adds up to its price', () => {
    expect(allocateByPolicy('B', minor(499_000), promises)).toEqual([
      13_785, 220_553, 220_552, 27_569, 16_541,
    ]);
    expect(allocateByPolicy('A', minor(499_000), promises)).toEqual([0, 249_500, 249_500, 0, 0]);
  });
  test('policy A · without surgery · is policy B', () => {
    const others = promises.filter(({ kind }) => kind !== 'surgery');
    expect(allocateByPolicy('A', minor(1_000), others)).toEqual(allocateByPolicy('B', minor(1_000), others));
  });
});

describe('recognise', () => {
  const parts = [
    part('surgery:OD', 240_000, 220_553, true),
    part('surgery:OS', 240_000, 220_552),
    part('aftercare:1', 5_000, 4_595),
  ];
  test('what is delivered · earns · its allocated amount, once however often named', () => {
    expect(recognise(parts, ['surgery:OS', 'aftercare:1', 'surgery:OS'])).toEqual({
      ok: true,
      amounts: [
        { id: 'surgery:OS', amountMinor: 220_552 },
        { id: 'aftercare:1', amountMinor: 4_595 },
      ],
    });
    expect(unrecognised(parts)).toBe(225_147);
  });
  test('what was recognised before or never promised · is refused · by name', () => {
    expect(recognise(parts, ['surgery:OD', 'aftercare:9', 'surgery:OS'])).toEqual({
      ok: false,
      refusals: [
        { id: 'surgery:OD', code: 'recognised_before' },
        { id: 'aftercare:9', code: 'unknown_promise' },
      ],
    });
  });
});

describe('reallocate', () => {
  const parts = [
    part('surgery:OD', 240_000, 220_553, true),
    part('surgery:OS', 240_000, 220_552),
    part('aftercare', 30_000, 27_569),
  ];
  const changed = (reading: 'prospective' | 'catch_up', price: number, of = parts) =>
    reallocate(reading, { priceMinor: minor(price), parts: of });
  test('the left eye cancelled · read prospectively · leaves the right eye as it was', () => {
    const left = parts.filter(({ id }) => id !== 'surgery:OS');
    expect(changed('prospective', 303_000, left)).toEqual({
      ok: true,
      allocated: [220_553, 82_447],
      catchUpMinor: 0,
    });
  });
  test('the same · read as a catch-up · moves what was earned', () => {
    const left = parts.filter(({ id }) => id !== 'surgery:OS');
    expect(changed('catch_up', 303_000, left)).toEqual({
      ok: true,
      allocated: [269_333, 33_667],
      catchUpMinor: 48_780,
    });
  });
  test('a change that cannot be · is refused · by name', () => {
    const all = parts.map((each) => ({ ...each, recognisedOn: done }));
    expect(changed('prospective', 200_000)).toEqual({ ok: false, code: 'less_than_recognised' });
    expect(changed('prospective', 999_999, all)).toEqual({ ok: false, code: 'nothing_left_to_deliver' });
    expect(changed('catch_up', 10, [])).toEqual({ ok: false, code: 'nothing_left_to_deliver' });
    expect(changed('prospective', 468_674, all)).toMatchObject({ ok: true, catchUpMinor: 0 });
  });
  test('any change, in both readings · allocates the whole price · and prospectively moves nothing earned', () => {
    const anyPart = fc.record({
      standAlone: fc.integer({ min: 1, max: 500_000 }),
      allocated: fc.nat({ max: 500_000 }),
      delivered: fc.boolean(),
    });
    fc.assert(
      fc.property(
        fc.array(anyPart, { minLength: 1, maxLength: 8 }),
        fc.nat({ max: 3_000_000 }),
        (rows, price) => {
          const list = rows.map(({ standAlone, allocated, delivered }, index) =>
            part(String(index), standAlone, allocated, delivered),
          );
          const ahead = changed('prospective', price, list);
          if (ahead.ok) {
            expect(ahead.allocated.reduce((total, each) => total + each, 0)).toBe(price);
            list.forEach((each, index) => {
              if (each.recognisedOn !== null) expect(ahead.allocated[index]).toBe(each.allocatedMinor);
            });
          }
          const anew = changed('catch_up', price, list);
          if (!anew.ok) throw new Error('a catch-up over parts is always possible');
          expect(anew.allocated.reduce((total, each) => total + each, 0)).toBe(price);
          const open = list.reduce(
            (total, each, index) => total + (each.recognisedOn === null ? (anew.allocated[index] ?? 0) : 0),
            0,
          );
          const earned = list.reduce(
            (total, each) => total + (each.recognisedOn === null ? 0 : each.allocatedMinor),
            0,
          );
          expect(earned + anew.catchUpMinor + open).toBe(price);
        },
      ),
      { numRuns: CASES },
    );
  });
});

describe('runOff', () => {
  const on = (text: string | null, amount: number) => ({
    expectedOn: text === null ? null : clinicDate(text),
    amountMinor: minor(amount),
  });
  test('promises by their day · spread over months · and what has none, is late or lies beyond stands apart', () => {
    const rows = [
      on('2026-03-31', 1),
      on('2026-04-30', 2),
      on('2026-06-01', 4),
      on('2026-06-30', 8),
      on('2026-07-01', 16),
      on(null, 32),
      on('2026-04-01', 64),
    ];
    expect(runOff(rows, clinicDate('2026-04-15'), 3)).toEqual({
      overdueMinor: 1,
      months: [
        { month: '2026-04-01', amountMinor: 66 },
        { month: '2026-05-01', amountMinor: 0 },
        { month: '2026-06-01', amountMinor: 12 },
      ],
      laterMinor: 16,
      undatedMinor: 32,
      totalMinor: 127,
    });
  });
  test('any promises · parts · add up to the total', () => {
    const anyPromise = fc.record({
      expectedOn: fc.option(anyDay),
      amountMinor: fc.nat({ max: 500_000 }).map(minor),
    });
    fc.assert(
      fc.property(fc.array(anyPromise), anyDay, fc.integer({ min: 1, max: 36 }), (rows, from, months) => {
        const spread = runOff(rows, from, months);
        const inMonths = spread.months.reduce((total, { amountMinor }) => total + amountMinor, 0);
        expect(spread.overdueMinor + inMonths + spread.laterMinor + spread.undatedMinor).toBe(
          spread.totalMinor,
        );
        expect(spread.totalMinor).toBe(rows.reduce((total, { amountMinor }) => total + amountMinor, 0));
      }),
      { numRuns: CASES },
    );
  });
});
