/**
 * The exported journal against hledger, an independent implementation of double entry (Debian package hledger).
 * hledger must accept it with its strict checks, and its balances must be our trial balance.
 */
import { execFileSync } from 'node:child_process';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { accountOf, type JournalEntry, journalText, trialBalance } from '#domain/ledger/index';
import { type CurrencyCode, currencyCode } from '#domain/money/index';
import { anyJournal } from '#tests/factories/entries';

/** A process is started for each case, so these properties run a fixed, smaller number of cases. */
const JOURNALS = 40;

function hledger(journal: string, ...args: string[]): string {
  return execFileSync('hledger', ['-f', '-', ...args], {
    input: journal,
    encoding: 'utf8',
    env: { ...process.env, LC_ALL: 'C.UTF-8' },
    stdio: ['pipe', 'pipe', 'pipe'],
  });
}

/** Account number → minor units, as hledger adds them up. Tills and payees are summed into their account. */
function balancesBy(journal: string, currency: CurrencyCode): Map<string, number> {
  const csv = hledger(journal, 'balance', '--flat', '--no-total', '-O', 'csv');
  const balances = new Map<string, number>();
  for (const line of csv.trim().split('\n').slice(1)) {
    const [, account = '', amount = ''] = /^"([^"]*)","([^"]*)"$/.exec(line) ?? [];
    const code = /:(\d{4}) /.exec(account)?.[1] ?? '';
    const digits = amount.replace(` ${currency}`, '').replace('.', '');
    balances.set(code, (balances.get(code) ?? 0) + Number.parseInt(digits, 10));
  }
  return balances;
}

function ours(entries: readonly JournalEntry[]): Map<string, number> {
  return new Map(
    trialBalance(entries)
      .filter(({ balanceMinor }) => balanceMinor !== 0)
      .map(({ account, balanceMinor }) => [account, balanceMinor]),
  );
}

const nonZero = (balances: Map<string, number>) =>
  new Map([...balances].filter(([, amount]) => amount !== 0));

describe('hledger', () => {
  test.each(['EUR', 'JPY', 'KWD'])(
    'any journal in %s · exported · passes the strict check and has our trial balance',
    (code) => {
      const currency = currencyCode(code);
      fc.assert(
        fc.property(anyJournal(currency), (entries) => {
          const text = journalText(entries, currency);
          hledger(text, 'check', '--strict');
          const sorted = (balances: Map<string, number>) => [...balances].sort();
          expect(sorted(nonZero(balancesBy(text, currency)))).toEqual(sorted(ours(entries)));
        }),
        { numRuns: JOURNALS },
      );
    },
  );
  test('a journal with one unit changed · is refused · by hledger', () => {
    const [entries] = fc.sample(anyJournal(), { numRuns: 1, seed: 1 });
    const text = journalText(entries ?? [], currencyCode('EUR'));
    const spoilt = text.replace(
      /^( {4}.*)(\d)(\.\d\d EUR)/m,
      (_, before: string, digit: string, after: string) => {
        return `${before}${(Number.parseInt(digit, 10) + 1) % 10}${after}`;
      },
    );
    expect(spoilt).not.toBe(text);
    expect(() => hledger(spoilt, 'check')).toThrow(/balance/i);
  });
  test('account types · as hledger sees them · are those of the chart', () => {
    const [entries] = fc.sample(anyJournal(), { numRuns: 1, seed: 2 });
    const text = journalText(entries ?? [], currencyCode('EUR'));
    const letters = { asset: 'A', liability: 'L', equity: 'E', income: 'R', expense: 'X' } as const;
    for (const [kind, letter] of Object.entries(letters)) {
      const names = hledger(text, 'accounts', `type:${letter}`).trim().split('\n');
      const kinds = names.map((name) => accountOf(/:(\d{4}) /.exec(name)?.[1] ?? '')?.kind);
      expect(new Set(kinds)).toEqual(new Set([kind]));
    }
  });
});
