import { describe, expect, test } from 'vitest';
import { CHART, feeAccruedEntry, journalAccount, journalText, receiptEntry } from '#domain/ledger/index';
import { currencyCode, minor } from '#domain/money/index';
import { clinicDate } from '#domain/time/index';
import { EUR, header } from '#tests/factories/entries';

describe('journalText', () => {
  const bookedOn = clinicDate('2026-03-13');
  test('a receipt booked the next day · with a memo that could break the line · is written whole', () => {
    const zero = minor(0);
    const entry = receiptEntry({
      ...header('Receipt LQ-26-00881; paid | by\nher father'),
      courseId: 7,
      tenders: [{ tender: 'cash', amountMinor: minor(49_905), tillId: 3 }],
      changeMinor: minor(5),
      roundingMinor: zero,
      appliedMinor: minor(49_900),
      creditMinor: zero,
      receivableMinor: zero,
    });
    const text = journalText([{ ...entry, entryId: 12, bookedOn }], EUR);
    expect(
      text
        .split('\n\n')
        .at(-1)
        ?.split('\n')
        .map((line) => line.replace(/ {2,}/g, '  ')),
    ).toEqual([
      '2026-03-13 (12) Receipt LQ-26-00881, paid / by her father  ; kind:receipt, occurred:2026-03-12',
      '  Assets:1010 Till:3  499.00 EUR',
      '  Liabilities:2000 Contract liability  -499.00 EUR  ; course:7',
      '',
    ]);
    expect(text).toContain('commodity 1000.00 EUR\n');
    expect(text).toContain('account Assets:1010 Till:3  ; type:A\n');
  });
  test('currencies of no and three decimals · are written · with as many', () => {
    const write = (code: string) => {
      const currency = currencyCode(code);
      const fee = feeAccruedEntry({
        ...header(),
        currency,
        payeeId: 2,
        courseId: 1,
        eye: 'OD',
        amountMinor: minor(45),
      });
      return journalText([{ ...fee, entryId: 1, bookedOn }], currency);
    };
    expect(write('JPY')).toMatch(/^commodity 1000\. JPY\n.* 45 JPY.* -45 JPY/s);
    expect(write('KWD')).toMatch(/^commodity 1000\.000 KWD\n.* 0\.045 KWD.* -0\.045 KWD/s);
  });
  test('an entry in another currency, an account nobody knows · are refused', () => {
    const fee = feeAccruedEntry({ ...header(), payeeId: 2, courseId: 1, eye: 'OD', amountMinor: minor(45) });
    expect(() => journalText([{ ...fee, entryId: 1, bookedOn }], currencyCode('GBP'))).toThrow(RangeError);
    expect(() => journalAccount({ account: '9999' })).toThrow(RangeError);
  });
  test('the chart · has each number once · in order', () => {
    const codes = CHART.map(({ code }) => code);
    expect(codes).toEqual([...new Set(codes)].sort());
  });
});
