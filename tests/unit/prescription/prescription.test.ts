import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  formatPower,
  formatPrescription,
  minusForm,
  prescriptionAtCornea,
  sphericalEquivalentMd,
  strongestMeridianMd,
  transpose,
} from '#domain/prescription/index';
import { anyPrescription, rx } from '#tests/factories/prescriptions';

describe('notation', () => {
  test('transposed twice · any prescription · is itself', () => {
    fc.assert(
      fc.property(anyPrescription, (each) => {
        expect(transpose(transpose(each))).toEqual(each);
      }),
    );
  });
  test('the other form · of any prescription · has the same minus form, equivalent and meridian', () => {
    fc.assert(
      fc.property(anyPrescription, (each) => {
        const other = transpose(each);
        expect(minusForm(other)).toEqual(minusForm(each));
        expect(sphericalEquivalentMd(other)).toBe(sphericalEquivalentMd(each));
        expect(strongestMeridianMd(other)).toBe(strongestMeridianMd(each));
      }),
    );
  });
  test('an axis · turned by a quarter · stays on the dial', () => {
    expect(transpose(rx('-1.00 -1.00 x 180')).axisDeg).toBe(90);
    expect(transpose(rx('-1.00 -1.00 x 90')).axisDeg).toBe(180);
    expect(transpose(rx('-1.00 -1.00 x 91')).axisDeg).toBe(1);
  });
});

describe('strongest meridian', () => {
  const cases: readonly [string, number][] = [
    ['-2.00 -1.50 x 75', -3_500],
    ['-2.75 -0.50 x 110', -3_250],
    ['+4.00 -1.00 x 10', 4_000],
    ['+1.00 -3.00 x 10', -2_000],
    ['+1.00 -2.00 x 10', -1_000],
    ['-1.00 +2.00 x 100', -1_000],
    ['+2.00', 2_000],
    ['pl', 0],
  ];
  for (const [text, expected] of cases) {
    test(`${text} · is ${formatPower(expected)}`, () => expect(strongestMeridianMd(rx(text))).toBe(expected));
  }
});

test('written out · each case · has its own words', () => {
  expect(formatPrescription(rx('-2/-1.5x75'))).toBe('−2.00 −1.50 × 75');
  expect(formatPrescription(transpose(rx('-2/-1.5x75')))).toBe('−3.50 +1.50 × 165');
  expect(formatPrescription(rx('pl'))).toBe('plano');
  expect(formatPrescription(rx('-2'))).toBe('−2.00 DS');
  expect(formatPower(-3_375)).toBe('−3.375');
  expect(formatPower(125)).toBe('+0.125');
});

test('moved to the cornea · each meridian by itself', () => {
  expect(prescriptionAtCornea(rx('-8.00 -2.00 x 30'))).toEqual({
    sphereMd: -7_299,
    cylinderMd: -1_630,
    axisDeg: 30,
    vertexMm: 0,
  });
});
