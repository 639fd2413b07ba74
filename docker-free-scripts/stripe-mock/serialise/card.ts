import type Stripe from 'stripe';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { CardRecord } from '#stand-ins/stripe-mock/state/records';

const NO_ADDRESS = { city: null, country: null, line1: null, line2: null, postal_code: null, state: null };

export function billingDetails(card: CardRecord): Stripe.Charge.BillingDetails {
  return { address: NO_ADDRESS, email: card.payer.email, name: card.payer.name, phone: null, tax_id: null };
}

export function cardChecks(card: CardRecord) {
  const codeWasWrong = card.behaviour === 'wrong_code';
  return {
    address_line1_check: null,
    address_postal_code_check: null,
    cvc_check: codeWasWrong ? 'fail' : 'pass',
  };
}

export function presentCard(_service: Service, card: CardRecord): Stripe.PaymentMethod {
  return {
    id: card.id,
    object: 'payment_method',
    billing_details: billingDetails(card),
    card: {
      brand: card.brand,
      checks: cardChecks(card),
      country: null,
      display_brand: card.brand,
      exp_month: card.expMonth,
      exp_year: card.expYear,
      funding: 'credit',
      generated_from: null,
      last4: card.last4,
      networks: { available: [card.brand], preferred: null },
      regulated_status: 'unregulated',
      three_d_secure_usage: { supported: true },
      wallet: null,
    },
    created: card.created,
    customer: card.customer,
    customer_account: null,
    livemode: false,
    metadata: {},
    type: 'card',
  };
}
