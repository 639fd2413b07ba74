/**
 * Changes of a contract and goods expected back, against the examples of IFRS 15. Allocation by stand-alone price
 * (Examples 33, 34, 49, KPMG) is checked with the prices in tests/reference/pricing/allocation.test.ts.
 * Facts and results from memory: IFRS 15 Illustrative Examples 5 (IE19–IE24) and 8 (IE37–IE41); Example 22 (IE110–IE112).
 */
import { describe, expect, test } from 'vitest';
import { minor, sum } from '#domain/money/index';
import {
  allocateByPolicy,
  allocateByStandAlone,
  type PromisePart,
  reallocate,
} from '#domain/obligations/index';
import { clinicDate } from '#domain/time/index';

const whole = (units: number) => minor(units * 100);

function parts(count: number, standAlone: number, allocated: number, delivered: boolean): PromisePart[] {
  return Array.from({ length: count }, (_, index) => ({
    id: `${delivered ? 'delivered' : 'open'} ${allocated} ${index}`,
    standAloneMinor: whole(standAlone),
    allocatedMinor: whole(allocated),
    recognisedOn: delivered ? clinicDate('2026-01-31') : null,
  }));
}

describe('contract changes', () => {
  test('IFRS 15 Ex. 5 case B · 60 of 120 products at 100 delivered, 30 more for 80 each · 93.33 for each of the 90 left', () => {
    const open = [...parts(60, 100, 100, false), ...parts(30, 100, 0, false)];
    const result = reallocate('prospective', {
      priceMinor: whole(12_000 + 2_400),
      parts: [...parts(60, 100, 100, true), ...open],
    });
    if (!result.ok) throw new Error(result.code);
    expect(result.allocated.slice(0, 60).every((each) => each === whole(100))).toBe(true);
    expect(new Set(result.allocated.slice(60))).toEqual(new Set([minor(9_334), minor(9_333)]));
    expect(sum(result.allocated.slice(60))).toBe(whole(8_400));
    expect(result.catchUpMinor).toBe(0);
  });
  test('IFRS 15 Ex. 8 · 1,000,000 at 60 % earned, changed to 1,350,000 at 51.2 % · catches up 91,200', () => {
    const one = (id: string, weight: number, allocated: number, delivered: boolean): PromisePart => ({
      id,
      standAloneMinor: minor(weight),
      allocatedMinor: whole(allocated),
      recognisedOn: delivered ? clinicDate('2026-01-31') : null,
    });
    const result = reallocate('catch_up', {
      priceMinor: whole(1_350_000),
      parts: [one('performed', 512, 600_000, true), one('to perform', 488, 400_000, false)],
    });
    expect(result).toEqual({
      ok: true,
      allocated: [whole(691_200), whole(658_800)],
      catchUpMinor: whole(91_200),
    });
  });
});

describe('goods expected back', () => {
  test('IFRS 15 Ex. 22 · 100 units at 100, 97 kept · revenue 9,700, refund liability 300', () => {
    expect(allocateByStandAlone(whole(10_000), [whole(9_700), whole(300)])).toEqual([
      whole(9_700),
      whole(300),
    ]);
  });
});

describe('the worked package · own figures', () => {
  test('4,990.00 over 150 / 2,400 / 2,400 / 300 / 180 · by policy B · as the books show it', () => {
    const standAlone = [150, 2_400, 2_400, 300, 180];
    const kinds = ['assessment', 'surgery', 'surgery', 'aftercare', 'enhancement'];
    const promises = standAlone.map((units, index) => ({
      kind: kinds[index] ?? '',
      standAloneMinor: whole(units),
    }));
    const [assessment, od, os, aftercare, enhancement] = allocateByPolicy('B', whole(4_990), promises);
    expect([assessment, od, os, aftercare, enhancement]).toEqual([13_785, 220_553, 220_552, 27_569, 16_541]);
  });
});
