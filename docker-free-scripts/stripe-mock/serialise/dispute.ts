import type Stripe from 'stripe';
import { EVIDENCE_FIELDS } from '#stand-ins/stripe-mock/objects/evidence';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { DisputeRecord } from '#stand-ins/stripe-mock/state/records';
import { presentBalanceTransaction } from './balance-transaction.ts';

export function presentDispute(service: Service, dispute: DisputeRecord): Stripe.Dispute {
  const { brand } = service.store.get('cards', service.store.get('charges', dispute.chargeId).cardId);
  return {
    id: dispute.id,
    object: 'dispute',
    amount: dispute.amount,
    balance_transactions: dispute.balanceTransactions.map((id) =>
      presentBalanceTransaction(service, service.store.get('balanceTransactions', id)),
    ),
    charge: dispute.chargeId,
    created: dispute.created,
    currency: dispute.currency,
    enhanced_eligibility_types: [],
    evidence: evidenceOf(dispute),
    evidence_details: {
      due_by: dispute.dueBy,
      enhanced_eligibility: {},
      has_evidence: Object.keys(dispute.evidence).length > 0,
      past_due: dispute.dueBy < service.clock.nowSeconds(),
      submission_count: dispute.submissionCount,
      submission_method: dispute.submissionCount > 0 ? 'manual' : 'not_submitted',
    },
    intended_submission_method: null,
    is_charge_refundable: dispute.inquiry,
    livemode: false,
    metadata: { ...dispute.metadata },
    payment_intent: dispute.intentId,
    payment_method_details: {
      card: {
        brand,
        case_type: dispute.inquiry ? 'inquiry' : 'chargeback',
        network: brand,
        network_reason_code: '10.4',
      },
      type: 'card',
    },
    reason: dispute.reason,
    status: dispute.status,
  };
}

function evidenceOf(dispute: DisputeRecord): Stripe.Dispute.Evidence {
  const fields = EVIDENCE_FIELDS.map((field) => [field, dispute.evidence[field] ?? null]);
  return { ...Object.fromEntries(fields), enhanced_evidence: {} };
}
