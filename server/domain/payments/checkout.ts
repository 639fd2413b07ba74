import type { Derivation } from '#domain/derivation';
import { greatest, type Minor, minor, sum, ZERO } from '#domain/money/index';
import type { StateMachine } from '#domain/state-machine';
import type { ClinicDate } from '#domain/time/index';
import { type DueSum, dueNow } from './waterfall.ts';

/**
 * The life of one try to have a debt paid on the hosted page.
 * made: stored, nothing sent for certain · sent: the call went out · open: the page can be paid · paid: money came and was
 * recorded · expired, failed: it did not · superseded: given up for a newer try · quarantined: money came that is not
 * what was asked for, a person looks.
 */
export type CheckoutState =
  | 'made'
  | 'sent'
  | 'open'
  | 'paid'
  | 'expired'
  | 'failed'
  | 'superseded'
  | 'quarantined';

/**
 * An answer can be lost, so that a made attempt may turn out to be in any state at the processor. The processor's word
 * that money came is true whatever we thought before: expired, failed and superseded may still be paid, never reopened.
 * Paid is the end; what goes back is a refund.
 */
export const CHECKOUT: StateMachine<CheckoutState> = {
  of: 'checkout',
  follows: {
    made: ['sent', 'open', 'paid', 'expired', 'failed', 'superseded', 'quarantined'],
    sent: ['open', 'paid', 'expired', 'failed', 'quarantined'],
    open: ['paid', 'expired', 'superseded', 'quarantined'],
    paid: [],
    expired: ['paid', 'quarantined'],
    failed: ['paid', 'quarantined'],
    superseded: ['paid', 'quarantined'],
    quarantined: ['paid'],
  },
};

/** States in which a course's attempt stands in the way of another (invariant 7). */
export const LIVE_CHECKOUTS: readonly CheckoutState[] = ['made', 'sent', 'open'];

/** A sum of the schedule with who pays it. */
export interface CheckoutDue extends DueSum {
  readonly kind: 'deposit' | 'balance' | 'instalment' | 'lender';
  readonly label: string;
}

export type CheckoutAmount =
  | { readonly ok: true; readonly amountMinor: Minor; readonly why: Derivation }
  | { readonly ok: false; readonly code: 'nothing_due'; readonly words: string };

/**
 * What a hosted checkout asks for. 'deposit': what is due by today and not paid. 'balance': everything the patient has
 * still to pay, due or not; a lender's part is never asked of the patient.
 *
 * @param paidMinor what was paid towards the course, a lender's payments included
 */
export function checkoutAmount(asked: {
  readonly purpose: 'deposit' | 'balance';
  readonly dues: readonly CheckoutDue[];
  readonly paidMinor: Minor;
  readonly lenderPaidMinor: Minor;
  readonly today: ClinicDate;
}): CheckoutAmount {
  const own = asked.dues.filter(({ kind }) => kind !== 'lender');
  const ownPaid = greatest(minor(asked.paidMinor - asked.lenderPaidMinor), ZERO);
  const now = asked.purpose === 'deposit';
  const counted = now ? own.filter(({ dueOn }) => dueOn !== null && dueOn <= asked.today) : own;
  const amountMinor = now
    ? dueNow(own, ownPaid, asked.today)
    : greatest(minor(sum(own.map((due) => due.amountMinor)) - ownPaid), ZERO);
  if (amountMinor === 0) {
    const words = now ? 'Nothing is due today.' : 'Nothing is left to pay.';
    return { ok: false, code: 'nothing_due', words };
  }
  return {
    ok: true,
    amountMinor,
    why: {
      title: now ? 'Due now' : 'Left to pay',
      steps: [
        ...counted.map(({ label, dueOn, amountMinor: due }) => ({
          label,
          amountMinor: due,
          ...(dueOn === null ? {} : { text: `due ${dueOn}` }),
        })),
        ...(ownPaid > 0 ? [{ label: 'Paid', amountMinor: minor(-ownPaid) }] : []),
        { label: now ? 'Due now' : 'Left to pay', amountMinor },
      ],
    },
  };
}
