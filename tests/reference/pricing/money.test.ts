import currencies from 'currency-codes';
import { describe, expect, test } from 'vitest';
import { applyRate, currencyCode, decimalsOf, divideHalfAway, includedTax, minor } from '#domain/money/index';

describe('ISO 4217 minor units · the package currency-codes', () => {
  test('every currency it lists · has our number of decimals', () => {
    const codes = currencies.codes();
    expect(codes.length).toBeGreaterThan(150);
    const differing = codes.filter(
      (code) => currencies.code(code)?.digits !== decimalsOf(currencyCode(code)),
    );
    // Metals, funds and test codes carry no minor unit in the standard; they are no money a clinic takes.
    const noMoney = [
      'XAG',
      'XAU',
      'XBA',
      'XBB',
      'XBC',
      'XBD',
      'XDR',
      'XPD',
      'XPT',
      'XSU',
      'XTS',
      'XUA',
      'XXX',
    ];
    expect(differing.filter((code) => !noMoney.includes(code))).toEqual([]);
  });
  test('none: JPY KRW CLP ISK VND XOF; three: BHD IQD JOD KWD LYD OMR TND · ISO 4217', () => {
    const none = ['JPY', 'KRW', 'CLP', 'ISK', 'VND', 'XOF'];
    const three = ['BHD', 'IQD', 'JOD', 'KWD', 'LYD', 'OMR', 'TND'];
    expect(none.map((code) => decimalsOf(currencyCode(code)))).toEqual(none.map(() => 0));
    expect(three.map((code) => decimalsOf(currencyCode(code)))).toEqual(three.map(() => 3));
  });
});

describe('rounding', () => {
  test('24.784 is 24.78 and 24.785 is 24.79 · Regulation (EC) 1103/97 Article 5', () => {
    expect(divideHalfAway(24_784n, 10n)).toBe(2_478n);
    expect(divideHalfAway(24_785n, 10n)).toBe(2_479n);
  });
  test('under half a penny goes down, half or more up · HMRC VATREC12030', () => {
    // 20 % of 0.62 is 12.4 pence, of 0.63 12.6; 5 % of 0.50 is 2.5.
    expect(applyRate(minor(62), 2_000)).toBe(12);
    expect(applyRate(minor(63), 2_000)).toBe(13);
    expect(applyRate(minor(50), 500)).toBe(3);
  });
  test('the tax in 120.00 at 20 % · own arithmetic · is 20.00', () => {
    expect(includedTax(minor(12_000), 2_000)).toBe(2_000);
  });
});
