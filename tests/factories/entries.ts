import fc from 'fast-check';
import { CHART, type EntryDraft, type EntryLine, type JournalEntry } from '#domain/ledger/index';
import { type CurrencyCode, currencyCode, type Minor, minor } from '#domain/money/index';
import { type ClinicDate, clinicDate } from '#domain/time/index';

export const EUR = currencyCode('EUR');

export const header = (memo = 'Test') => ({
  occurredOn: clinicDate('2026-03-12'),
  memo,
  currency: EUR,
});

/** A line on any account, naming everything its account asks for. */
const anyLine: fc.Arbitrary<EntryLine> = fc
  .record({
    account: fc.constantFrom(...CHART.map(({ code }) => code)),
    amountMinor: fc.integer({ min: -1e9, max: 1e9 }).filter((amount) => amount !== 0),
    courseId: fc.integer({ min: 1, max: 9 }),
    tillId: fc.integer({ min: 1, max: 3 }),
    payeeId: fc.integer({ min: 1, max: 3 }),
    eye: fc.constantFrom('OD' as const, 'OS' as const),
    obligationId: fc.integer({ min: 1, max: 20 }),
  })
  .map((line) => ({ ...line, amountMinor: minor(line.amountMinor) }));

/** Entries that balance: any lines and one that makes up for them. */
export function anyEntry(currency: CurrencyCode = EUR): fc.Arbitrary<EntryDraft> {
  return fc
    .record({
      kind: fc.constantFrom('receipt' as const, 'delivery' as const, 'payout' as const),
      occurredOn: anyDay,
      memo: fc.string({ unit: 'grapheme', maxLength: 30 }),
      lines: fc.array(anyLine, { minLength: 1, maxLength: 5 }),
      last: anyLine,
    })
    .map(({ lines, last, ...rest }) => {
      const off = lines.reduce((total, line) => total + line.amountMinor, 0);
      return { ...rest, currency, lines: [...lines, { ...last, amountMinor: minor(-off) }] };
    })
    .filter(({ lines }) => lines.every((line) => line.amountMinor !== 0));
}

export const anyDay: fc.Arbitrary<ClinicDate> = fc
  .record({
    year: fc.integer({ min: 2020, max: 2030 }),
    day: fc.integer({ min: 1, max: 28 }),
    month: fc.integer({ min: 1, max: 12 }),
  })
  .map(({ year, month, day }) =>
    clinicDate(`${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`),
  );

/** A journal of entries with numbers and booked days. */
export function anyJournal(currency: CurrencyCode = EUR): fc.Arbitrary<JournalEntry[]> {
  return fc
    .array(fc.record({ entry: anyEntry(currency), bookedOn: anyDay }), { minLength: 1, maxLength: 12 })
    .map((rows) => rows.map(({ entry, bookedOn }, index) => ({ ...entry, bookedOn, entryId: index + 1 })));
}

/** Balance of one account in a draft, debits less credits. */
export function balanceOf(entry: EntryDraft, account: string): Minor {
  return minor(
    entry.lines.reduce((total, line) => total + (line.account === account ? line.amountMinor : 0), 0),
  );
}
