import { least, type Minor, minor, negate, subtract, sum, ZERO } from '#domain/money/index';
import type { Tender } from '#domain/payments/index';
import { ACCOUNT } from './chart.ts';
import { draft, type EntryDraft, type EntryHeader, type EntryLine } from './entry.ts';

/** Where each tender's money stands until it is in the bank; spent credit leaves what we owed the payer. */
export const TENDER_ACCOUNT: Readonly<Record<Tender, string>> = {
  cash: ACCOUNT.till,
  card_machine: ACCOUNT.terminalClearing,
  online_card: ACCOUNT.onlineClearing,
  bank_transfer: ACCOUNT.transfersAwaited,
  cheque: ACCOUNT.chequesInHand,
  lender: ACCOUNT.lender,
  credit: ACCOUNT.unappliedCredit,
};

/** A tender as it is booked; cash names its till. */
export interface BookedTender {
  readonly tender: Tender;
  readonly amountMinor: Minor;
  readonly tillId?: number;
}

/** Money taken, online or at the desk, for a course or on account. */
export interface ReceiptToBook extends EntryHeader {
  /** null when everything is credit on account. */
  readonly courseId: number | null;
  /** What was handed over, before change. */
  readonly tenders: readonly BookedTender[];
  /** Handed back in cash, from the till of the first cash tender. */
  readonly changeMinor: Minor;
  /** Receipt total less (tenders − change): above zero when rounding favoured the payer (invariant 5). */
  readonly roundingMinor: Minor;
  /** What goes to the course. */
  readonly appliedMinor: Minor;
  /** What was paid beyond it: credit on account. */
  readonly creditMinor: Minor;
  /** Debit balance of 1130 for this course: cleared before anything is put into the contract liability. */
  readonly receivableMinor: Minor;
}

/** Assessment fee, deposit online, receipt over several tenders: Dr tenders, Cr 1130 as far as owed, 2000, 2020. */
export function receiptEntry(receipt: ReceiptToBook): EntryDraft {
  const { courseId, changeMinor, roundingMinor, appliedMinor, creditMinor } = receipt;
  const cash = receipt.tenders.filter(({ tender }) => tender === 'cash');
  const others = receipt.tenders.filter(({ tender }) => tender !== 'cash');
  const course = courseId === null ? {} : { courseId };
  return draft('receipt', receipt, [
    ...cashLines(cash, changeMinor),
    ...others.map(({ tender, amountMinor }) => ({
      account: TENDER_ACCOUNT[tender],
      amountMinor,
      ...(tender === 'credit' ? course : {}),
    })),
    { account: ACCOUNT.cashRounding, amountMinor: roundingMinor },
    ...toCourse(courseId, appliedMinor, receipt.receivableMinor),
    { account: ACCOUNT.unappliedCredit, amountMinor: negate(creditMinor), ...course },
  ]);
}

/** One line per till: what stayed in it. */
function cashLines(cash: readonly BookedTender[], changeMinor: Minor): EntryLine[] {
  const tills = [...new Set(cash.map(({ tillId }) => tillId))];
  return tills.map((tillId, index) => {
    const taken = sum(cash.filter((each) => each.tillId === tillId).map((each) => each.amountMinor));
    return {
      account: ACCOUNT.till,
      amountMinor: index === 0 ? subtract(taken, changeMinor) : taken,
      ...(tillId === undefined ? {} : { tillId }),
    };
  });
}

/** Credits a course: what it owes first, the rest is promised and not yet earned. */
export function toCourse(courseId: number | null, amountMinor: Minor, receivableMinor: Minor): EntryLine[] {
  const course = courseId === null ? {} : { courseId };
  const cleared = least(amountMinor, positive(receivableMinor));
  return [
    { account: ACCOUNT.patientReceivable, amountMinor: negate(cleared), ...course },
    { account: ACCOUNT.contractLiability, amountMinor: negate(subtract(amountMinor, cleared)), ...course },
  ];
}

/** Debits a course: its contract liability as far as it has it, the rest becomes owed. */
export function fromCourse(courseId: number, amountMinor: Minor, liabilityMinor: Minor): EntryLine[] {
  const held = least(amountMinor, positive(liabilityMinor));
  return [
    { account: ACCOUNT.contractLiability, amountMinor: held, courseId },
    { account: ACCOUNT.patientReceivable, amountMinor: subtract(amountMinor, held), courseId },
  ];
}

function positive(amount: Minor): Minor {
  return amount > 0 ? amount : ZERO;
}

/** A transfer or cheque that the bank now shows: Dr 1000 Cr 1025 or 1015. */
export function bankedEntry(
  what: EntryHeader & { readonly tender: 'bank_transfer' | 'cheque'; readonly amountMinor: Minor },
): EntryDraft {
  return draft('banked', what, move(ACCOUNT.bank, TENDER_ACCOUNT[what.tender], what.amountMinor));
}

/** The processor's fee on a payment: Dr 5100 Cr 1100. */
export function processorFeeEntry(what: EntryHeader & { readonly feeMinor: Minor }): EntryDraft {
  return draft('processor_fee', what, move(ACCOUNT.cardFees, ACCOUNT.onlineClearing, what.feeMinor));
}

/** The processor pays out: Dr 1000 Cr 1100. A negative payout takes from the bank. */
export function payoutEntry(what: EntryHeader & { readonly amountMinor: Minor }): EntryDraft {
  return draft('payout', what, move(ACCOUNT.bank, ACCOUNT.onlineClearing, what.amountMinor));
}

/** The card machine's takings reach the bank less their fee: Dr 1000, 5100 Cr 1110. */
export function terminalSettlementEntry(
  what: EntryHeader & { readonly grossMinor: Minor; readonly feeMinor: Minor },
): EntryDraft {
  return draft('terminal_settlement', what, settled(what, ACCOUNT.cardFees, ACCOUNT.terminalClearing));
}

/** A lender settles less its discount: Dr 1000, 5110 Cr 1120. */
export function lenderSettlementEntry(
  what: EntryHeader & { readonly grossMinor: Minor; readonly discountMinor: Minor },
): EntryDraft {
  const { grossMinor, discountMinor } = what;
  const lines = settled({ grossMinor, feeMinor: discountMinor }, ACCOUNT.lenderDiscount, ACCOUNT.lender);
  return draft('lender_settlement', what, lines);
}

function settled(
  what: { readonly grossMinor: Minor; readonly feeMinor: Minor },
  feeAccount: string,
  clearing: string,
): EntryLine[] {
  return [
    { account: ACCOUNT.bank, amountMinor: subtract(what.grossMinor, what.feeMinor) },
    { account: feeAccount, amountMinor: what.feeMinor },
    { account: clearing, amountMinor: negate(what.grossMinor) },
  ];
}

/** Dr one account, Cr another. */
export function move(debit: string, credit: string, amountMinor: Minor): EntryLine[] {
  return [
    { account: debit, amountMinor },
    { account: credit, amountMinor: minor(-amountMinor) },
  ];
}
