import { add, type CurrencyCode, type Minor, negate } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { type EntryDraft, type EntryKind, type EntryLine, withoutZeroLines } from './entry.ts';

interface Settlement {
  readonly currency: CurrencyCode;
  readonly occurredOn: ClinicDate;
  readonly memo: string;
}

function entry(kind: EntryKind, at: Settlement, lines: readonly EntryLine[]): EntryDraft {
  return {
    kind,
    occurredOn: at.occurredOn,
    memo: at.memo,
    currency: at.currency,
    lines: withoutZeroLines(lines),
  };
}

/** The processor kept its fee: Dr 5100 Cr 1100. A fee given back is negative. */
export function processorFeeEntry(at: Settlement & { readonly feeMinor: Minor }): EntryDraft {
  return entry('processor_fee', at, [
    { account: '5100', amountMinor: at.feeMinor },
    { account: '1100', amountMinor: negate(at.feeMinor) },
  ]);
}

/** The processor paid out: Dr 1000 Cr 1100. A negative payout, drawn from the bank, turns the signs. */
export function payoutEntry(at: Settlement & { readonly amountMinor: Minor }): EntryDraft {
  return entry('payout', at, [
    { account: '1000', amountMinor: at.amountMinor },
    { account: '1100', amountMinor: negate(at.amountMinor) },
  ]);
}

/** The card machine's batch reached the bank less its fee: Dr 1000, Dr 5100, Cr 1110. */
export function terminalSettledEntry(
  at: Settlement & { readonly netMinor: Minor; readonly feeMinor: Minor },
): EntryDraft {
  return entry('terminal_settled', at, [
    { account: '1000', amountMinor: at.netMinor },
    { account: '5100', amountMinor: at.feeMinor },
    { account: '1110', amountMinor: negate(add(at.netMinor, at.feeMinor)) },
  ]);
}

/** The lender paid less its discount: Dr 1000, Dr 5110, Cr 1120. */
export function lenderSettledEntry(
  at: Settlement & { readonly netMinor: Minor; readonly discountMinor: Minor },
): EntryDraft {
  return entry('lender_settled', at, [
    { account: '1000', amountMinor: at.netMinor },
    { account: '5110', amountMinor: at.discountMinor },
    { account: '1120', amountMinor: negate(add(at.netMinor, at.discountMinor)) },
  ]);
}

/** A transfer or cheque is shown by the bank: Dr 1000 Cr 1025 or 1015. */
export function bankedEntry(
  at: Settlement & { readonly amountMinor: Minor; readonly from: 'transfer' | 'cheque' },
): EntryDraft {
  return entry('transfer_banked', at, [
    { account: '1000', amountMinor: at.amountMinor },
    { account: at.from === 'transfer' ? '1025' : '1015', amountMinor: negate(at.amountMinor) },
  ]);
}

interface TillMovement extends Settlement {
  readonly tillId: number;
  readonly amountMinor: Minor;
}

/** A till is opened with a float from petty cash: Dr 1010 Cr 1030; negative when it is given back at the close. */
export function tillFloatEntry(at: TillMovement): EntryDraft {
  return entry('till_float', at, [
    { account: '1010', amountMinor: at.amountMinor, tillId: at.tillId },
    { account: '1030', amountMinor: negate(at.amountMinor) },
  ]);
}

/** Cash leaves the till for the safe and the bank: Dr 1020 Cr 1010. */
export function tillDropEntry(at: TillMovement): EntryDraft {
  return entry('till_drop', at, [
    { account: '1020', amountMinor: at.amountMinor },
    { account: '1010', amountMinor: negate(at.amountMinor), tillId: at.tillId },
  ]);
}

/** Something small was paid from the till: Dr 5150 Cr 1010. */
export function tillPaidOutEntry(at: TillMovement): EntryDraft {
  return entry('till_paid_out', at, [
    { account: '5150', amountMinor: at.amountMinor },
    { account: '1010', amountMinor: negate(at.amountMinor), tillId: at.tillId },
  ]);
}

/** The count differs from what the till should hold (counted less expected): short Dr 5130 Cr 1010, over the other way. */
export function tillDifferenceEntry(at: TillMovement): EntryDraft {
  return entry('till_difference', at, [
    { account: '1010', amountMinor: at.amountMinor, tillId: at.tillId },
    { account: '5130', amountMinor: negate(at.amountMinor) },
  ]);
}

/** The bank shows the cash: Dr 1000 Cr 1020. */
export function cashBankedEntry(at: Settlement & { readonly amountMinor: Minor }): EntryDraft {
  return entry('cash_banked', at, [
    { account: '1000', amountMinor: at.amountMinor },
    { account: '1020', amountMinor: negate(at.amountMinor) },
  ]);
}

/** What the clinic began with: Dr or Cr the account, the other side on 3000. */
export function openingEntry(
  at: Settlement & { readonly account: string; readonly amountMinor: Minor },
): EntryDraft {
  return entry('opening', at, [
    { account: at.account, amountMinor: at.amountMinor },
    { account: '3000', amountMinor: negate(at.amountMinor) },
  ]);
}
