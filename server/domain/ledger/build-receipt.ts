import {
  add,
  type CurrencyCode,
  least,
  type Minor,
  minor,
  negate,
  subtract,
  sum,
  ZERO,
} from '#domain/money/index';
import { TENDER_ACCOUNT, type Tender } from '#domain/payments/index';
import type { ClinicDate } from '#domain/time/index';
import { type EntryDraft, type EntryLine, withoutZeroLines } from './entry.ts';

export interface ReceiptPosting {
  readonly courseId: number;
  readonly number: string;
  readonly currency: CurrencyCode;
  readonly occurredOn: ClinicDate;
  readonly tenders: readonly { readonly tender: Tender; readonly amountMinor: Minor }[];
  /** Cash given back; it comes off the till. */
  readonly changeMinor: Minor;
  /** What cash rounding took (positive: the patient paid less than was due) or gave (negative). */
  readonly roundingMinor: Minor;
  /** Towards the price of the course. */
  readonly appliedMinor: Minor;
  /** Beyond it: credit on account. */
  readonly creditMinor: Minor;
  /** What the patient owes for what was already delivered (balance of 1130, not negative): cleared first. */
  readonly receivableMinor: Minor;
  /** The till cash went into; needed when there is cash. */
  readonly tillId: number | null;
}

/**
 * Money taken: Dr each tender's account, Cr 1130 as far as the patient owes for what was delivered, Cr 2000 for the rest,
 * Cr 2020 for what is beyond the price, Dr or Cr 5135 for cash rounding.
 * Throws RangeError when tenders − change + rounding is not applied + credit (invariant 5).
 */
export function receiptEntry(posting: ReceiptPosting): EntryDraft {
  const received = sum(posting.tenders.map((part) => part.amountMinor));
  const total = add(posting.appliedMinor, posting.creditMinor);
  if (add(subtract(received, posting.changeMinor), posting.roundingMinor) !== total) {
    throw new RangeError('Tenders less change and rounding are not the receipt’s total');
  }
  const toReceivable = least(posting.appliedMinor, posting.receivableMinor);
  const course = { courseId: posting.courseId };
  return {
    kind: 'receipt',
    occurredOn: posting.occurredOn,
    memo: `Receipt ${posting.number}`,
    currency: posting.currency,
    lines: withoutZeroLines([
      ...tenderLines(posting),
      { account: '5135', amountMinor: posting.roundingMinor },
      { account: '1130', amountMinor: negate(toReceivable), ...course },
      { account: '2000', amountMinor: negate(subtract(posting.appliedMinor, toReceivable)), ...course },
      { account: '2020', amountMinor: negate(posting.creditMinor), ...course },
    ]),
  };
}

/** One line per account; change comes off the cash. */
function tenderLines(posting: ReceiptPosting): EntryLine[] {
  const byAccount = new Map<string, { tender: Tender; amount: Minor }>();
  for (const { tender, amountMinor } of posting.tenders) {
    const account = TENDER_ACCOUNT[tender];
    const before = byAccount.get(account)?.amount ?? ZERO;
    byAccount.set(account, { tender, amount: add(before, amountMinor) });
  }
  return [...byAccount].map(([account, { tender, amount }]) => ({
    account,
    amountMinor: tender === 'cash' ? subtract(amount, posting.changeMinor) : amount,
    ...(tender === 'cash' && posting.tillId !== null ? { tillId: posting.tillId } : {}),
    ...(tender === 'credit' ? { courseId: posting.courseId } : {}),
  }));
}

/** The opposite of an entry, to be posted naming it. */
export function reverseEntry(
  draft: Pick<EntryDraft, 'currency' | 'lines' | 'memo'>,
  occurredOn: ClinicDate,
): EntryDraft {
  return {
    kind: 'reversal',
    occurredOn,
    memo: `Reverses: ${draft.memo}`.slice(0, 200),
    currency: draft.currency,
    lines: draft.lines.map((line) => ({ ...line, amountMinor: minor(-line.amountMinor) })),
  };
}
