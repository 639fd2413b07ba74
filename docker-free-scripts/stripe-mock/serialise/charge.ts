import type Stripe from 'stripe';
import { refundedOf } from '#stand-ins/stripe-mock/objects/refund-sums';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { CardRecord, ChargeRecord } from '#stand-ins/stripe-mock/state/records';
import { billingDetails, cardChecks } from './card.ts';

export function presentCharge(service: Service, charge: ChargeRecord): Stripe.Charge {
  const card = service.store.get('cards', charge.cardId);
  const succeeded = charge.status === 'succeeded';
  const refunded = refundedOf(service, charge.id);
  return {
    id: charge.id,
    object: 'charge',
    amount: charge.amount,
    amount_captured: succeeded ? charge.amount : 0,
    amount_refunded: refunded,
    application: null,
    application_fee: null,
    application_fee_amount: null,
    balance_transaction: charge.balanceTransaction,
    billing_details: billingDetails(card),
    calculated_statement_descriptor: null,
    captured: succeeded,
    created: charge.created,
    currency: charge.currency,
    customer: charge.customer,
    description: charge.description,
    disputed: service.store.all('disputes').some((dispute) => dispute.chargeId === charge.id),
    failure_balance_transaction: null,
    failure_code: charge.failure?.code ?? null,
    failure_message: charge.failure?.message ?? null,
    fraud_details: {},
    livemode: false,
    metadata: { ...charge.metadata },
    on_behalf_of: null,
    outcome: outcomeOf(charge),
    paid: succeeded,
    payment_intent: charge.intentId,
    payment_method: charge.cardId,
    payment_method_details: { card: cardDetails(charge, card), type: 'card' },
    receipt_email: charge.receiptEmail,
    receipt_number: null,
    receipt_url: null,
    refunded: succeeded && refunded === charge.amount,
    review: null,
    shipping: null,
    source: null,
    source_transfer: null,
    statement_descriptor: null,
    statement_descriptor_suffix: null,
    status: charge.status,
    transfer_data: null,
    transfer_group: null,
  };
}

function outcomeOf({ failure }: ChargeRecord): Stripe.Charge.Outcome {
  return {
    advice_code: null,
    network_advice_code: null,
    network_decline_code: null,
    network_status: failure === null ? 'approved_by_network' : 'declined_by_network',
    reason: failure?.declineCode ?? null,
    risk_level: 'normal',
    seller_message: failure === null ? 'Payment complete.' : 'The bank declined the payment.',
    type: failure === null ? 'authorized' : 'issuer_declined',
  };
}

function cardDetails(charge: ChargeRecord, card: CardRecord): Stripe.Charge.PaymentMethodDetails.Card {
  return {
    amount_authorized: charge.status === 'succeeded' ? charge.amount : null,
    authorization_code: null,
    brand: card.brand,
    checks: cardChecks(card),
    country: null,
    electronic_commerce_indicator: null,
    exp_month: card.expMonth,
    exp_year: card.expYear,
    funding: 'credit',
    installments: null,
    last4: card.last4,
    mandate: null,
    network: card.brand,
    network_transaction_id: null,
    regulated_status: 'unregulated',
    three_d_secure: charge.authenticated
      ? {
          authentication_flow: 'challenge',
          electronic_commerce_indicator: '05',
          exemption_indicator: null,
          result: 'authenticated',
          result_reason: null,
          transaction_id: null,
          version: '2.2.0',
        }
      : null,
    transaction_link_id: null,
    wallet: null,
  };
}
