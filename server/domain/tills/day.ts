import { type Minor, subtract } from '#domain/money/index';
import { TENDER_LABEL, type Tender } from '#domain/payments/index';
import type { StateMachine } from '#domain/state-machine';
import type { TillState } from './till.ts';

export type DayState = 'open' | 'counted' | 'closed';

/** A site's day. Reopening a closed one needs the manager and a reason; both versions stay. */
export const DAY: StateMachine<DayState> = {
  of: 'day',
  follows: { open: ['counted'], counted: ['open', 'closed'], closed: ['open'] },
};

/** What is known of a day when somebody wants to close it. */
export interface DayFacts {
  readonly tills: readonly {
    readonly name: string;
    readonly state: TillState;
    /** null while not counted. */
    readonly differenceMinor: Minor | null;
    readonly reason: string | null;
  }[];
  /** Takings of the day by tender from receipts that stand, beside the proof of them. */
  readonly takings: readonly Taking[];
  /** Card payments taken at the desk, whose machine has to be closed with a batch. */
  readonly terminalReceipts: number;
  readonly batchEntered: boolean;
  readonly refundsWaiting: { readonly count: number; readonly amountMinor: Minor };
  readonly approvalsWaiting: number;
  /** Online payments that are not what was asked for. */
  readonly quarantined: number;
}

export interface Taking {
  readonly tender: Tender;
  readonly receiptsMinor: Minor;
  /** null: the proof comes later (a lender, a transfer, a cheque). */
  readonly proofMinor: Minor | null;
}

export interface DayException {
  readonly code:
    | 'till_not_closed'
    | 'till_difference'
    | 'batch_missing'
    | 'takings_differ'
    | 'proof_awaited'
    | 'refunds_waiting'
    | 'approvals_waiting'
    | 'payment_quarantined';
  /** True: the day cannot be closed before it is settled. */
  readonly blocking: boolean;
  readonly words: string;
  readonly amountMinor: Minor | null;
}

/** Everything about a day that needs a person, what holds up the close first. */
export function dayExceptions(facts: DayFacts): readonly DayException[] {
  const found = [
    ...facts.tills.flatMap(tillExceptions),
    ...batchExceptions(facts),
    ...facts.takings.flatMap(takingExceptions),
    ...waiting(facts),
  ];
  return [...found.filter(({ blocking }) => blocking), ...found.filter(({ blocking }) => !blocking)];
}

/** A day may be closed when nothing blocking is left. */
export function mayClose(exceptions: readonly DayException[]): boolean {
  return exceptions.every(({ blocking }) => !blocking);
}

function tillExceptions(till: DayFacts['tills'][number]): DayException[] {
  const { name, state, differenceMinor, reason } = till;
  const found: DayException[] = [];
  if (state !== 'closed')
    found.push(
      exception(
        'till_not_closed',
        true,
        `${name} is ${state === 'open' ? 'not counted' : 'counted, not closed'}.`,
      ),
    );
  if (differenceMinor !== null && differenceMinor !== 0) {
    const explained = (reason ?? '').trim() !== '';
    const words = explained ? `${name} differs: ${reason}` : `${name} differs and has no reason yet.`;
    found.push(exception('till_difference', !explained, words, differenceMinor));
  }
  return found;
}

function batchExceptions({ terminalReceipts, batchEntered }: DayFacts): DayException[] {
  if (terminalReceipts === 0 || batchEntered) return [];
  return [exception('batch_missing', true, 'The card machine’s batch is not entered.')];
}

/** Cash is proved by the tills, which have their own exceptions; a difference there is not told twice. */
function takingExceptions({ tender, receiptsMinor, proofMinor }: Taking): DayException[] {
  const name = TENDER_LABEL[tender];
  if (proofMinor === null) {
    if (receiptsMinor === 0) return [];
    return [exception('proof_awaited', false, `${name} is awaited.`, receiptsMinor)];
  }
  const off = subtract(proofMinor, receiptsMinor);
  if (off === 0 || tender === 'cash') return [];
  return [exception('takings_differ', true, `${name} and its proof differ.`, off)];
}

function waiting({ refundsWaiting, approvalsWaiting, quarantined }: DayFacts): DayException[] {
  const found: DayException[] = [];
  if (quarantined > 0) {
    const words = `${quarantined} online ${quarantined === 1 ? 'payment is' : 'payments are'} not what was asked for.`;
    found.push(exception('payment_quarantined', false, words));
  }
  if (refundsWaiting.count > 0) {
    const words = `${refundsWaiting.count} ${refundsWaiting.count === 1 ? 'refund waits' : 'refunds wait'} for a manager.`;
    found.push(exception('refunds_waiting', false, words, refundsWaiting.amountMinor));
  }
  if (approvalsWaiting > 0) {
    const words = `${approvalsWaiting} ${approvalsWaiting === 1 ? 'approval is' : 'approvals are'} waiting.`;
    found.push(exception('approvals_waiting', false, words));
  }
  return found;
}

function exception(
  code: DayException['code'],
  blocking: boolean,
  words: string,
  amountMinor: Minor | null = null,
): DayException {
  return { code, blocking, words, amountMinor };
}
