import type Stripe from 'stripe';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { RefundRecord } from '#stand-ins/stripe-mock/state/records';

export function presentRefund(service: Service, refund: RefundRecord): Stripe.Refund {
  const charge = service.store.get('charges', refund.chargeId);
  return {
    id: refund.id,
    object: 'refund',
    amount: refund.amount,
    balance_transaction: refund.balanceTransaction,
    charge: refund.chargeId,
    created: refund.created,
    currency: refund.currency,
    customer: charge.customer,
    customer_account: null,
    destination_details: {
      card: { type: refund.status === 'pending' ? 'pending' : 'refund' },
      type: 'card',
    },
    ...(refund.failureBalanceTransaction === null
      ? {}
      : { failure_balance_transaction: refund.failureBalanceTransaction }),
    ...(refund.failureReason === null ? {} : { failure_reason: refund.failureReason }),
    metadata: { ...refund.metadata },
    ...(refund.status === 'requires_action' ? { next_action: { type: 'display_details' } } : {}),
    payment_intent: refund.intentId,
    payment_method: charge.cardId,
    ...(refund.pendingReason === null ? {} : { pending_reason: refund.pendingReason }),
    reason: refund.reason,
    receipt_number: null,
    source_transfer_reversal: null,
    status: refund.status,
    transfer_reversal: null,
  };
}
