import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { currencyCode, formatAmount, formatMoney, minor, parseMoney, plainAmount } from '#domain/money/index';

const EUR = currencyCode('EUR');
const JPY = currencyCode('JPY');
const KWD = currencyCode('KWD');

describe('formatAmount', () => {
  test.each([
    [456_000, EUR, '4,560.00'],
    [-196_000, EUR, '−1,960.00'],
    [5, EUR, '0.05'],
    [0, EUR, '0.00'],
    [1_234_567, JPY, '1,234,567'],
    [1_250, KWD, '1.250'],
  ])('%i of %s · reads %s', (amount, currency, text) => {
    expect(formatAmount(minor(amount), currency)).toBe(text);
  });
  test('alone in a sentence · the sign of the currency leads', () => {
    expect(formatMoney(minor(-1200), EUR)).toBe('−€12.00');
    expect(plainAmount(minor(-1200), EUR)).toBe('-12.00');
  });
});

describe('parseMoney', () => {
  test.each([
    ['1,250', EUR, 125_000],
    ['1250.5', EUR, 125_050],
    ['1.250,50', EUR, 125_050],
    ['1,250.50', EUR, 125_050],
    ['€ 40', EUR, 4_000],
    ['−3.20', EUR, -320],
    ['.5', EUR, 50],
    ['1,234,567', JPY, 1_234_567],
    ['1.250', KWD, 1_250],
    ['1.250', EUR, 125_000],
  ])('%s in %s · reads as %i', (text, currency, amount) => {
    expect(parseMoney(text, currency)).toEqual({ ok: true, amount });
  });
  test.each([
    ['', 'empty'],
    ['forty', 'not_an_amount'],
    ['1,2,3', 'not_an_amount'],
    ['1.2345', 'too_many_decimals'],
    ['99999999999999999', 'too_large'],
  ])('%s · is refused as %s', (text, why) => {
    expect(parseMoney(text, EUR)).toEqual({ ok: false, why });
  });
  test('what is shown · reads back · in currencies of 0, 2 and 3 decimals', () => {
    fc.assert(
      fc.property(fc.integer({ min: -1e12, max: 1e12 }), fc.constantFrom(EUR, JPY), (n, currency) => {
        expect(parseMoney(formatAmount(minor(n), currency), currency)).toEqual({ ok: true, amount: n });
      }),
      { numRuns: 1000 },
    );
  });
});
