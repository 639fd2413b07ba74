import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  isKnownCurrency,
  leastCharge,
  readableAmount,
  wrongEnding,
} from '#stand-ins/stripe-mock/objects/currencies';
import { chargeFee } from '#stand-ins/stripe-mock/objects/fees';

describe('chargeFee', () => {
  // Own arithmetic on the stand-in's invented tariff: 1.4 % and 25, halves up.
  test.each([
    [50_000, 725],
    [123_456, 1_753],
    [35, 25],
    [36, 26],
    [250, 29],
    [1, 25],
  ])('of %i · %i', (amount, fee) => {
    expect(chargeFee(amount)).toBe(fee);
  });

  test('any amount · the exact fee, rounded by less than a half', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 99_999_999 }), (amount) => {
        const thousandths = (chargeFee(amount) - 25) * 1_000 - amount * 14;
        expect(thousandths).toBeGreaterThan(-500);
        expect(thousandths).toBeLessThanOrEqual(500);
      }),
    );
  });
});

describe('readableAmount', () => {
  test.each([
    [123_456_789, 'eur', '1,234,567.89 EUR'],
    [5, 'eur', '0.05 EUR'],
    [-1_200, 'eur', '−12.00 EUR'],
    [1_500, 'jpy', '1,500 JPY'],
    [12_340, 'kwd', '12.340 KWD'],
    [12_300, 'isk', '123.00 ISK'],
  ])('%i %s · %s', (amount, currency, text) => {
    expect(readableAmount(amount, currency)).toBe(text);
  });
});

describe('The table of currencies', () => {
  test.each([
    ['eur', 50],
    ['sek', 300],
    ['pln', 200],
    ['chf', 1],
  ])('least charge in %s · %i', (currency, least) => {
    expect(leastCharge(currency)).toBe(least);
  });

  test.each([
    [100, 'isk', null],
    [150, 'isk', 'must end in 00'],
    [1_230, 'tnd', null],
    [1_234, 'tnd', 'must end in 0'],
    [1_234, 'eur', null],
  ])('%i %s · %s', (amount, currency, complaint) => {
    expect(wrongEnding(amount, currency)).toBe(complaint);
  });

  test('a code nobody uses · unknown', () => {
    expect([isKnownCurrency('eur'), isKnownCurrency('xqq'), isKnownCurrency('EUR')]).toEqual([
      true,
      false,
      false,
    ]);
  });
});
