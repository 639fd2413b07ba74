import type { Eye } from '#domain/eye';
import {
  add,
  type CurrencyCode,
  greatest,
  least,
  type Minor,
  negate,
  subtract,
  sum,
  ZERO,
} from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { type EntryDraft, withoutZeroLines } from './entry.ts';

interface Common {
  readonly currency: CurrencyCode;
  readonly occurredOn: ClinicDate;
}

export interface DeliveryPosting extends Common {
  readonly courseId: number;
  readonly memo: string;
  /** What the course still holds on 2000 (credit balance as a positive amount): used first. */
  readonly heldMinor: Minor;
  readonly parts: readonly {
    readonly obligationId: number;
    readonly eye: Eye | null;
    readonly account: string;
    readonly amountMinor: Minor;
    /** Tax that this delivery makes due, on top of the amount. */
    readonly taxMinor: Minor;
  }[];
}

/** Something promised was delivered: Dr 2000 as far as the course has it, the rest 1130; Cr income per obligation, Cr 2200 its tax. */
export function deliveryEntry(posting: DeliveryPosting): EntryDraft {
  const tax = sum(posting.parts.map((part) => part.taxMinor));
  const whole = add(sum(posting.parts.map((part) => part.amountMinor)), tax);
  const fromHeld = least(whole, greatest(posting.heldMinor, ZERO));
  const course = { courseId: posting.courseId };
  return {
    kind: 'delivery',
    occurredOn: posting.occurredOn,
    memo: posting.memo,
    currency: posting.currency,
    lines: withoutZeroLines([
      { account: '2000', amountMinor: fromHeld, ...course },
      { account: '1130', amountMinor: subtract(whole, fromHeld), ...course },
      ...posting.parts.map((part) => ({
        account: part.account,
        amountMinor: negate(part.amountMinor),
        ...course,
        obligationId: part.obligationId,
        ...(part.eye === null ? {} : { eye: part.eye }),
      })),
      { account: '2200', amountMinor: negate(tax), ...course },
    ]),
  };
}

export interface FeePosting extends Common {
  readonly payeeId: number;
  readonly courseId: number;
  readonly eye: Eye;
  readonly memo: string;
  readonly amountMinor: Minor;
}

/** A surgeon's fee accrues: Dr 5000 Cr 2100. */
export function feeAccruedEntry(posting: FeePosting): EntryDraft {
  const about = { payeeId: posting.payeeId, courseId: posting.courseId, eye: posting.eye };
  return {
    kind: 'fee_accrued',
    occurredOn: posting.occurredOn,
    memo: posting.memo,
    currency: posting.currency,
    lines: withoutZeroLines([
      { account: '5000', amountMinor: posting.amountMinor, ...about },
      { account: '2100', amountMinor: negate(posting.amountMinor), ...about },
    ]),
  };
}

/** A fee comes back: Dr 2100 as far as it is still owed, beyond it 1150, Cr 5000. */
export function feeClawedBackEntry(posting: FeePosting & { readonly owedMinor: Minor }): EntryDraft {
  const about = { payeeId: posting.payeeId, courseId: posting.courseId, eye: posting.eye };
  const fromOwed = least(posting.amountMinor, greatest(posting.owedMinor, ZERO));
  return {
    kind: 'fee_clawed_back',
    occurredOn: posting.occurredOn,
    memo: posting.memo,
    currency: posting.currency,
    lines: withoutZeroLines([
      { account: '2100', amountMinor: fromOwed, ...about },
      { account: '1150', amountMinor: subtract(posting.amountMinor, fromOwed), ...about },
      { account: '5000', amountMinor: negate(posting.amountMinor), ...about },
    ]),
  };
}
