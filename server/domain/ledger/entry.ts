import type { Eye } from '#domain/eye';
import type { CurrencyCode, Minor } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { accountOf } from './chart.ts';

/** One line of an entry. Debits are positive, credits negative, zero never stands. */
export interface EntryLine {
  readonly account: string;
  readonly amountMinor: Minor;
  readonly courseId?: number;
  readonly eye?: Eye;
  readonly obligationId?: number;
  readonly tillId?: number;
  /** The surgeon a fee is owed to. */
  readonly payeeId?: number;
}

/** A balanced entry as a rule proposes it; the day it is booked on and its number come when it is posted. */
export interface EntryDraft {
  readonly kind: EntryKind;
  readonly occurredOn: ClinicDate;
  readonly memo: string;
  readonly currency: CurrencyCode;
  readonly lines: readonly EntryLine[];
}

/** Everything that moves money or income; one kind per row of the posting rules. */
export type EntryKind =
  | 'receipt'
  | 'transfer_banked'
  | 'processor_fee'
  | 'payout'
  | 'terminal_settled'
  | 'lender_settled'
  | 'delivery'
  | 'option_expired'
  | 'cancellation'
  | 'refund'
  | 'dispute_opened'
  | 'dispute_won'
  | 'dispute_lost'
  | 'fee_accrued'
  | 'fee_clawed_back'
  | 'fee_withheld'
  | 'fee_paid'
  | 'till_float'
  | 'till_drop'
  | 'till_paid_out'
  | 'till_difference'
  | 'cash_banked'
  | 'opening'
  | 'reversal';

/** Why a draft is not an entry. */
export type EntryFinding =
  | { readonly code: 'too_few_lines' }
  | { readonly code: 'unbalanced'; readonly byMinor: number }
  | { readonly code: 'zero_line'; readonly line: number }
  | { readonly code: 'unknown_account'; readonly line: number; readonly account: string }
  | { readonly code: 'dimension_missing'; readonly line: number; readonly dimension: string };

/** Checks a draft against the chart and the rule that it balances (invariant 1). Empty means sound. */
export function checkEntry(draft: EntryDraft): EntryFinding[] {
  const findings: EntryFinding[] = [];
  if (draft.lines.length < 2) findings.push({ code: 'too_few_lines' });
  const total = draft.lines.reduce((sum, line) => sum + line.amountMinor, 0);
  if (total !== 0) findings.push({ code: 'unbalanced', byMinor: total });
  draft.lines.forEach((line, index) => {
    findings.push(...checkLine(line, index + 1));
  });
  return findings;
}

function checkLine(line: EntryLine, at: number): EntryFinding[] {
  const known = accountOf(line.account);
  if (!known) return [{ code: 'unknown_account', line: at, account: line.account }];
  const held = { course: line.courseId, till: line.tillId, payee: line.payeeId };
  const findings: EntryFinding[] = known.needs
    .filter((dimension) => held[dimension] === undefined)
    .map((dimension) => ({ code: 'dimension_missing', line: at, dimension }));
  if (line.amountMinor === 0) findings.push({ code: 'zero_line', line: at });
  return findings;
}

/** Leaves out lines that came to nothing, so that builders may list every account of their rule. */
export function withoutZeroLines(lines: readonly EntryLine[]): EntryLine[] {
  return lines.filter((line) => line.amountMinor !== 0);
}
