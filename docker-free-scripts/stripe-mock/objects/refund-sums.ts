import type { Service } from '#stand-ins/stripe-mock/service';
import type { RefundRecord } from '#stand-ins/stripe-mock/state/records';

/** Whether the refund still counts against its charge: one that failed or was canceled gave the money back. */
export function counts(refund: RefundRecord): boolean {
  return refund.status !== 'failed' && refund.status !== 'canceled';
}

/** What is refunded of a charge, in minor units. */
export function refundedOf(service: Service, chargeId: string): number {
  return service.store
    .all('refunds')
    .filter((refund) => refund.chargeId === chargeId && counts(refund))
    .reduce((total, refund) => total + refund.amount, 0);
}
