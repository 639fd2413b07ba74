import { type Minor, negate } from '#domain/money/index';
import { ACCOUNT } from './chart.ts';
import { move } from './entries-of-receipts.ts';
import { draft, type EntryDraft, type EntryHeader } from './entry.ts';

/** Something of one till. */
export interface OfTill extends EntryHeader {
  readonly tillId: number;
  readonly amountMinor: Minor;
}

/** Float put into a till: Dr 1010 Cr petty cash, the bank, or opening balances when the clinic goes live. */
export function tillFloatEntry(
  what: OfTill & { readonly from: 'petty_cash' | 'bank' | 'opening_balances' },
): EntryDraft {
  const source = {
    petty_cash: ACCOUNT.pettyCash,
    bank: ACCOUNT.bank,
    opening_balances: ACCOUNT.openingBalances,
  };
  return draft('till_float', what, [
    { account: ACCOUNT.till, amountMinor: what.amountMinor, tillId: what.tillId },
    { account: source[what.from], amountMinor: negate(what.amountMinor) },
  ]);
}

/** Cash taken from a till towards the bank: Dr 1020 Cr 1010. */
export function tillDropEntry(what: OfTill): EntryDraft {
  return outOfTill('till_drop', what, ACCOUNT.cashInTransit);
}

/** A small expense paid from a till: Dr 5150 Cr 1010. */
export function tillPaidOutEntry(what: OfTill): EntryDraft {
  return outOfTill('till_paid_out', what, ACCOUNT.smallExpenses);
}

function outOfTill(kind: 'till_drop' | 'till_paid_out', what: OfTill, to: string): EntryDraft {
  return draft(kind, what, [
    { account: to, amountMinor: what.amountMinor },
    { account: ACCOUNT.till, amountMinor: negate(what.amountMinor), tillId: what.tillId },
  ]);
}

/**
 * A counted till that does not hold what it should: short Dr 5130 Cr 1010, over the other way.
 * @param what.differenceMinor counted less should hold: below zero is short
 */
export function tillDifferenceEntry(
  what: EntryHeader & { readonly tillId: number; readonly differenceMinor: Minor },
): EntryDraft {
  const { tillId, differenceMinor } = what;
  return draft('till_difference', what, [
    { account: ACCOUNT.till, amountMinor: differenceMinor, tillId },
    { account: ACCOUNT.overAndShort, amountMinor: negate(differenceMinor), tillId },
  ]);
}

/** Cash in transit that the bank now shows: Dr 1000 Cr 1020. */
export function cashBankedEntry(what: EntryHeader & { readonly amountMinor: Minor }): EntryDraft {
  return draft('cash_banked', what, move(ACCOUNT.bank, ACCOUNT.cashInTransit, what.amountMinor));
}
