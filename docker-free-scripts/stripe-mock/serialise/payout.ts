import type Stripe from 'stripe';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { PayoutRecord } from '#stand-ins/stripe-mock/state/records';

/** The one invented bank account all payouts go to. */
const BANK_ACCOUNT = 'ba_standinBankAccount000001';

export function presentPayout(_service: Service, payout: PayoutRecord): Stripe.Payout {
  return {
    id: payout.id,
    object: 'payout',
    amount: payout.amount,
    application_fee: null,
    application_fee_amount: null,
    arrival_date: payout.arrivalDate,
    automatic: true,
    balance_transaction: payout.balanceTransaction,
    created: payout.created,
    currency: payout.currency,
    description: 'Daily payout of the local stand-in',
    destination: BANK_ACCOUNT,
    failure_balance_transaction: payout.failureBalanceTransaction,
    failure_code: payout.failure?.code ?? null,
    failure_message: payout.failure?.message ?? null,
    livemode: false,
    metadata: {},
    method: 'standard',
    original_payout: null,
    payout_method: null,
    reconciliation_status: payout.reconciled ? 'completed' : 'in_progress',
    reversed_by: null,
    source_type: 'card',
    statement_descriptor: null,
    status: payout.status,
    trace_id: { status: 'pending', value: null },
    type: 'bank_account',
  };
}
