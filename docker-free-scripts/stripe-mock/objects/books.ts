import type { Service } from '#stand-ins/stripe-mock/service';
import type { BalanceTransactionRecord } from '#stand-ins/stripe-mock/state/records';
import { netOf } from './balance.ts';
import { counts, refundedOf } from './refund-sums.ts';

/**
 * Reads the whole state and tells what does not add up, in words; nothing when the books are right.
 */
export function checkBooks(service: Service): string[] {
  return [
    ...payoutProblems(service),
    ...chargeProblems(service),
    ...refundProblems(service),
    ...disputeProblems(service),
  ];
}

function payoutProblems(service: Service): string[] {
  const rows = service.store.all('balanceTransactions');
  return service.store.all('payouts').flatMap((payout) => {
    const carried = sum(rows.filter((row) => row.payoutId === payout.id));
    const own = sum(rows.filter((row) => row.source === payout.id && row.type === 'payout'));
    const returned = sum(rows.filter((row) => row.source === payout.id && row.type !== 'payout'));
    const shouldReturn = payout.status === 'failed' || payout.status === 'canceled' ? payout.amount : 0;
    return [
      ...(carried === 0 ? [] : [`The rows of payout ${payout.id} add up to ${carried}, not to zero`]),
      ...(own === -payout.amount
        ? []
        : [`Payout ${payout.id} of ${payout.amount} took ${-own} from the balance`]),
      ...(returned === shouldReturn ? [] : [`Payout ${payout.id} (${payout.status}) gave back ${returned}`]),
    ];
  });
}

function chargeProblems(service: Service): string[] {
  const rows = service.store.all('balanceTransactions');
  return service.store.all('charges').flatMap((charge) => {
    const own = rows.filter((row) => row.source === charge.id);
    const booked = charge.balanceTransaction === null ? 0 : charge.amount;
    const refunded = refundedOf(service, charge.id);
    return [
      ...(own.reduce((total, row) => total + row.amount, 0) === booked
        ? []
        : [`Charge ${charge.id} of ${charge.amount} is not in the balance exactly once`]),
      ...(charge.status === 'failed' && own.length > 0 ? [`Failed charge ${charge.id} moved money`] : []),
      ...(refunded <= charge.amount
        ? []
        : [`Charge ${charge.id} of ${charge.amount} has ${refunded} refunded`]),
    ];
  });
}

function refundProblems(service: Service): string[] {
  const rows = service.store.all('balanceTransactions');
  return service.store.all('refunds').flatMap((refund) => {
    const moved = sum(rows.filter((row) => row.source === refund.id));
    const shouldMove = counts(refund) && refund.balanceTransaction !== null ? -refund.amount : 0;
    return moved === shouldMove
      ? []
      : [`Refund ${refund.id} (${refund.status}) of ${refund.amount} moved ${moved}`];
  });
}

function disputeProblems(service: Service): string[] {
  const rows = service.store.all('balanceTransactions');
  return service.store.all('disputes').flatMap((dispute) => {
    const moved = rows
      .filter((row) => row.source === dispute.id)
      .reduce((total, row) => total + row.amount, 0);
    const shouldMove = dispute.inquiry || dispute.status === 'won' ? 0 : -dispute.amount;
    return moved === shouldMove
      ? []
      : [`Dispute ${dispute.id} (${dispute.status}) of ${dispute.amount} moved ${moved}`];
  });
}

function sum(rows: readonly BalanceTransactionRecord[]): number {
  return rows.reduce((total, row) => total + netOf(row), 0);
}
