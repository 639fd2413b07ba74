import { least, type Minor, minor, subtract, sum, ZERO } from '#domain/money/index';
import type { Tender } from '#domain/payments/index';
import type { ClinicDate } from '#domain/time/index';

/**
 * The order in which money goes back: first to where it can only go back (cards, lender), cash last, for it is the
 * easiest to misuse, then credit on account; among equals the newest first, as the longest refundable. Common practice.
 */
export const REFUND_ORDER: readonly Tender[] = [
  'online_card',
  'card_machine',
  'lender',
  'bank_transfer',
  'cheque',
  'cash',
  'credit',
];

/** A tender of a receipt that stands. */
export interface TakenTender {
  readonly receiptTenderId: number;
  readonly tender: Tender;
  readonly takenOn: ClinicDate;
  /** What stayed with the clinic: change is off. */
  readonly takenMinor: Minor;
  /** Refunds of it that are not failed or cancelled. */
  readonly returnedMinor: Minor;
  /** An open dispute: nothing of it goes back meanwhile. */
  readonly disputed: boolean;
}

export interface RefundPart {
  readonly receiptTenderId: number;
  readonly tender: Tender;
  readonly amountMinor: Minor;
}

export type RefundAllocation =
  | { readonly ok: true; readonly parts: readonly RefundPart[] }
  | {
      readonly ok: false;
      readonly code: 'nothing_to_refund' | 'more_than_is_left' | 'waits_for_dispute';
      /** The most that could go back now. */
      readonly mostMinor: Minor;
      readonly words: string;
    };

/** Shares a refund out to the tenders it came by, never more to one than was taken there and is left (invariant 9). */
export function allocateRefund(amountMinor: Minor, taken: readonly TakenTender[]): RefundAllocation {
  const open = taken.filter(({ disputed }) => !disputed);
  const mostMinor = sum(open.map(leftOf));
  if (amountMinor <= 0) {
    return { ok: false, code: 'nothing_to_refund', mostMinor, words: 'There is nothing to send back.' };
  }
  if (amountMinor > mostMinor) {
    const once = sum(taken.map(leftOf));
    return amountMinor <= once
      ? {
          ok: false,
          code: 'waits_for_dispute',
          mostMinor,
          words: 'A payment is in dispute; nothing of it goes back meanwhile.',
        }
      : { ok: false, code: 'more_than_is_left', mostMinor, words: 'Less than this was taken and is left.' };
  }
  let left = amountMinor;
  const parts: RefundPart[] = [];
  for (const each of [...open].sort(inRefundOrder)) {
    const part = least(leftOf(each), left);
    if (part === 0) continue;
    parts.push({ receiptTenderId: each.receiptTenderId, tender: each.tender, amountMinor: part });
    left = subtract(left, part);
  }
  return { ok: true, parts };
}

function leftOf({ takenMinor, returnedMinor }: TakenTender): Minor {
  return takenMinor > returnedMinor ? minor(takenMinor - returnedMinor) : ZERO;
}

function inRefundOrder(a: TakenTender, b: TakenTender): number {
  const byTender = REFUND_ORDER.indexOf(a.tender) - REFUND_ORDER.indexOf(b.tender);
  if (byTender !== 0) return byTender;
  if (a.takenOn !== b.takenOn) return a.takenOn < b.takenOn ? 1 : -1;
  return b.receiptTenderId - a.receiptTenderId;
}
