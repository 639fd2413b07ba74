import type { Eye } from '#domain/eye';
import { type CurrencyCode, type Minor, negate, sum } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { accountOf, type Dimension } from './chart.ts';

/** What happened; one source posts each kind once. */
export type HappeningKind =
  | 'receipt'
  | 'banked'
  | 'processor_fee'
  | 'payout'
  | 'terminal_settlement'
  | 'lender_settlement'
  | 'delivery'
  | 'option_expired'
  | 'tax'
  | 'cancellation'
  | 'refund_ordered'
  | 'refund_executed'
  | 'dispute_opened'
  | 'dispute_won'
  | 'dispute_lost'
  | 'impairment'
  | 'fee_accrued'
  | 'fee_clawback'
  | 'fee_withholding'
  | 'fee_set_off'
  | 'fee_paid'
  | 'till_float'
  | 'till_drop'
  | 'till_paid_out'
  | 'till_difference'
  | 'cash_banked';

/** An entry's kind; a reversal says of what. */
export type EntryKind = HappeningKind | `${HappeningKind}_reversed`;

/** One line: minor units, debit positive, credit negative. */
export interface EntryLine {
  readonly account: string;
  readonly amountMinor: Minor;
  readonly courseId?: number;
  readonly tillId?: number;
  readonly payeeId?: number;
  readonly eye?: Eye;
  readonly obligationId?: number;
}

/** When it happened, in which words, in which currency. */
export interface EntryHeader {
  readonly occurredOn: ClinicDate;
  readonly memo: string;
  readonly currency: CurrencyCode;
}

/** An entry before it is posted: the ledger adds the booked day, the number and who. */
export interface EntryDraft extends EntryHeader {
  readonly kind: EntryKind;
  readonly lines: readonly EntryLine[];
}

/** Why a draft is no entry. `line` counts from 0; null when the entry as a whole is meant. */
export interface EntryFinding {
  readonly code:
    | 'too_few_lines'
    | 'zero_line'
    | 'not_whole_units'
    | 'unknown_account'
    | 'missing_dimension'
    | 'unbalanced';
  readonly line: number | null;
  readonly words: string;
}

const NAMES: Readonly<Record<Dimension, (line: EntryLine) => unknown>> = {
  course: (line) => line.courseId,
  till: (line) => line.tillId,
  payee: (line) => line.payeeId,
  eye: (line) => line.eye,
  obligation: (line) => line.obligationId,
};

/**
 * Everything that is wrong with a draft; an empty list for a sound one (invariant 1).
 * An entry has one currency, so balanced means that its lines add up to zero.
 */
export function checkEntry(draft: EntryDraft): readonly EntryFinding[] {
  const findings = draft.lines.flatMap((line, index) => checkLine(line, index));
  if (draft.lines.length < 2) {
    findings.push({ code: 'too_few_lines', line: null, words: 'An entry has at least two lines.' });
  }
  if (findings.some(({ code }) => code === 'not_whole_units')) return findings;
  const off = draft.lines.reduce((total, line) => total + line.amountMinor, 0);
  if (off !== 0) {
    const words = `Debits and credits differ by ${off} minor units of ${draft.currency}.`;
    findings.push({ code: 'unbalanced', line: null, words });
  }
  return findings;
}

function checkLine(line: EntryLine, index: number): EntryFinding[] {
  if (!Number.isSafeInteger(line.amountMinor)) {
    return [{ code: 'not_whole_units', line: index, words: 'An amount is a whole number of minor units.' }];
  }
  const findings: EntryFinding[] = [];
  if (line.amountMinor === 0) {
    findings.push({ code: 'zero_line', line: index, words: 'A line moves something.' });
  }
  const account = accountOf(line.account);
  if (!account) {
    findings.push({
      code: 'unknown_account',
      line: index,
      words: `The chart has no account ${line.account}.`,
    });
    return findings;
  }
  for (const dimension of account.needs) {
    if (NAMES[dimension](line) === undefined) {
      const words = `A line on ${account.code} ${account.name} names its ${dimension}.`;
      findings.push({ code: 'missing_dimension', line: index, words });
    }
  }
  return findings;
}

/** A draft of the lines that move something. Builders may hand in lines of zero. */
export function draft(kind: EntryKind, header: EntryHeader, lines: readonly EntryLine[]): EntryDraft {
  const { occurredOn, memo, currency } = header;
  return { kind, occurredOn, memo, currency, lines: lines.filter((line) => line.amountMinor !== 0) };
}

/**
 * The entry that undoes another, line by line with the signs turned. It is dated when the mistake was mended, and the
 * posting names the entry it corrects (invariant 2). A reversal is not reversed: what is right is posted anew.
 */
export function reverseEntry(
  entry: EntryDraft & { readonly kind: HappeningKind },
  mended: { readonly occurredOn: ClinicDate; readonly memo: string },
): EntryDraft {
  return {
    kind: `${entry.kind}_reversed`,
    occurredOn: mended.occurredOn,
    memo: mended.memo,
    currency: entry.currency,
    lines: entry.lines.map((line) => ({ ...line, amountMinor: negate(line.amountMinor) })),
  };
}

/** Debits less credits of one account. */
export interface AccountBalance {
  readonly account: string;
  readonly currency: CurrencyCode;
  readonly balanceMinor: Minor;
}

/** Every account that moved, by number and currency. Adds up to zero per currency when every entry balances. */
export function trialBalance(
  entries: Iterable<Pick<EntryDraft, 'currency' | 'lines'>>,
): readonly AccountBalance[] {
  const amounts = new Map<string, { account: string; currency: CurrencyCode; amounts: Minor[] }>();
  for (const { currency, lines } of entries) {
    for (const { account, amountMinor } of lines) {
      const key = `${account} ${currency}`;
      const found = amounts.get(key);
      if (found) found.amounts.push(amountMinor);
      else amounts.set(key, { account, currency, amounts: [amountMinor] });
    }
  }
  return [...amounts]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([, row]) => ({ account: row.account, currency: row.currency, balanceMinor: sum(row.amounts) }));
}
