import type Stripe from 'stripe';
import { netOf } from '#stand-ins/stripe-mock/objects/balance';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { BalanceTransactionRecord } from '#stand-ins/stripe-mock/state/records';

export function presentBalanceTransaction(
  service: Service,
  row: BalanceTransactionRecord,
): Stripe.BalanceTransaction {
  return {
    id: row.id,
    object: 'balance_transaction',
    amount: row.amount,
    available_on: row.availableOn,
    balance_type: 'payments',
    created: row.created,
    currency: row.currency,
    description: row.description,
    exchange_rate: null,
    fee: row.fee,
    fee_details:
      row.fee === 0
        ? []
        : [
            {
              amount: row.fee,
              application: null,
              currency: row.currency,
              description: row.feeDescription,
              type: 'stripe_fee',
            },
          ],
    net: netOf(row),
    reporting_category: row.reportingCategory,
    source: row.source,
    status: row.availableOn <= service.clock.nowSeconds() ? 'available' : 'pending',
    type: row.type,
  };
}
