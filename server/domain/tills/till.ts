import type { Derivation, DerivationStep } from '#domain/derivation';
import { type Minor, negate, subtract, sum } from '#domain/money/index';
import type { StateMachine } from '#domain/state-machine';

export type TillState = 'open' | 'counted' | 'closed';

/** A till's shift. Counted may be counted again; closed is the end, the next shift is a new one. */
export const TILL: StateMachine<TillState> = {
  of: 'till',
  follows: { open: ['counted'], counted: ['counted', 'open', 'closed'], closed: [] },
};

/** What moved a till in a shift. Everything as a positive size. */
export interface TillMovements {
  readonly floatMinor: Minor;
  /** "08:40": when the float was counted, for the derivation. */
  readonly openedAt: string;
  /** Cash tenders of receipts that stand, and the change given back on them. */
  readonly receipts: { readonly count: number; readonly cashMinor: Minor; readonly changeMinor: Minor };
  readonly refunds: { readonly count: number; readonly amountMinor: Minor };
  readonly moves: readonly {
    readonly kind: 'drop' | 'paid_out';
    readonly amountMinor: Minor;
    /** What it was for or where it went, with the time. */
    readonly words: string;
  }[];
}

/** What a till should hold: float, cash receipts less change, less refunds, drops and what was paid out. */
export function shouldHold(till: TillMovements): { readonly amountMinor: Minor; readonly why: Derivation } {
  const { receipts, refunds } = till;
  const moved: DerivationStep[] = [
    ...(receipts.count === 0
      ? []
      : [
          {
            label: `${receipts.count} cash ${receipts.count === 1 ? 'receipt' : 'receipts'}, less change`,
            amountMinor: subtract(receipts.cashMinor, receipts.changeMinor),
          },
        ]),
    ...(refunds.count === 0
      ? []
      : [
          {
            label: `${refunds.count} cash ${refunds.count === 1 ? 'refund' : 'refunds'}`,
            amountMinor: negate(refunds.amountMinor),
          },
        ]),
    ...till.moves.map(({ kind, words, amountMinor }) => ({
      label: kind === 'drop' ? `Drop, ${words}` : `Paid out, ${words}`,
      amountMinor: negate(amountMinor),
    })),
  ];
  const amountMinor = sum([
    till.floatMinor,
    subtract(receipts.cashMinor, receipts.changeMinor),
    negate(refunds.amountMinor),
    ...till.moves.map((each) => negate(each.amountMinor)),
  ]);
  return {
    amountMinor,
    why: {
      title: 'Should hold',
      steps: [
        { label: `Float at ${till.openedAt}`, amountMinor: till.floatMinor },
        ...moved,
        { label: 'Should hold', amountMinor },
      ],
    },
  };
}

/** Counted less should hold: below zero is short. */
export function tillDifference(countedMinor: Minor, shouldHoldMinor: Minor): Minor {
  return subtract(countedMinor, shouldHoldMinor);
}

export interface TillRefusal {
  readonly field: string;
  readonly code: 'not_counted' | 'reason_missing' | 'same_person';
  readonly words: string;
}

/** Why a till cannot be closed yet; empty when it can. People are compared, not roles. */
export function checkTillClose(till: {
  readonly state: TillState;
  readonly differenceMinor: Minor;
  readonly reason: string | null;
  readonly countedBy: number | null;
  readonly closedBy: number;
}): readonly TillRefusal[] {
  const refusals: TillRefusal[] = [];
  if (till.state !== 'counted' || till.countedBy === null)
    refusals.push({ field: 'state', code: 'not_counted', words: 'The till is not counted.' });
  if (till.differenceMinor !== 0 && (till.reason ?? '').trim() === '')
    refusals.push({ field: 'reason', code: 'reason_missing', words: 'A difference needs a reason.' });
  if (till.countedBy === till.closedBy) {
    const words = 'Somebody other than who counted closes the till.';
    refusals.push({ field: 'closedBy', code: 'same_person', words });
  }
  return refusals;
}
