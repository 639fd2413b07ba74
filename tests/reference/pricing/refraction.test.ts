import { describe, expect, test } from 'vitest';
import { atCorneaMd, formatPrescription, sphericalEquivalentMd, transpose } from '#domain/prescription/index';
import { rx } from '#tests/factories/prescriptions';

describe('transposition', () => {
  const published: readonly [source: string, form: string, other: string][] = [
    ['eyeandcontacts.com', '+2.50 −1.50 × 170', '+1.00 +1.50 × 80'],
    ['eyeandcontacts.com', '−1.75 −1.25 × 60', '−3.00 +1.25 × 150'],
    ['eyeandcontacts.com', '+1.75 −3.25 × 40', '−1.50 +3.25 × 130'],
    ['mrcophth.com', '−2.00 +1.50 × 90', '−0.50 −1.50 × 180'],
  ];
  for (const [source, form, other] of published) {
    test(`${form} · ${source} · is ${other}, and back`, () => {
      expect(formatPrescription(transpose(rx(form)))).toBe(other);
      expect(formatPrescription(transpose(rx(other)))).toBe(form);
    });
  }
});

describe('spherical equivalent', () => {
  const published: readonly [source: string, form: string, expectedMd: number][] = [
    ['open-exam-prep.com', '-2.00 -1.00 x 90', -2_500],
    ['open-exam-prep.com', '+1.50 -0.50 x 90', 1_250],
    ['open-exam-prep.com', '-1.00 +2.00 x 90', 0],
    ['open-exam-prep.com', '0 -1.50 x 90', -750],
    ['our own arithmetic', '-3.00 -0.25 x 90', -3_125],
  ];
  for (const [source, form, expectedMd] of published) {
    test(`${form} · ${source} · is ${expectedMd / 1000} D`, () => {
      expect(sphericalEquivalentMd(rx(form))).toBe(expectedMd);
    });
  }
});

describe('vertex compensation at 12 mm, F / (1 − dF)', () => {
  // clevercalculator.com, re-derived: hundredths of a dioptre
  const published: readonly [number, number][] = [
    [-4, -3.82],
    [-8, -7.3],
    [-10, -8.93],
    [4, 4.2],
    [10, 11.36],
  ];
  for (const [spectacle, cornea] of published) {
    test(`${spectacle} D · clevercalculator.com · is ${cornea} D at the cornea`, () => {
      expect(Math.round(atCorneaMd(spectacle * 1000, 12) / 10) / 100).toBe(cornea);
    });
  }
  test('a lens that focuses on the cornea · has no power there', () => {
    expect(() => atCorneaMd(50_000, 20)).toThrow(RangeError);
  });
});
