import type Stripe from 'stripe';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { LineItem, SessionRecord } from '#stand-ins/stripe-mock/state/records';

export function presentSession(service: Service, session: SessionRecord): Stripe.Checkout.Session {
  return {
    ...unused(),
    id: session.id,
    object: 'checkout.session',
    adaptive_pricing: { enabled: session.adaptivePricing },
    allowed_payment_method_types: session.allowedPaymentMethodTypes && [...session.allowedPaymentMethodTypes],
    amount_subtotal: session.amountTotal,
    amount_total: session.amountTotal,
    cancel_url: session.cancelUrl,
    client_reference_id: session.clientReferenceId,
    created: session.created,
    currency: session.currency,
    customer: session.customer,
    customer_details: customerDetails(session),
    customer_email: session.customerEmail,
    expires_at: session.expiresAt,
    livemode: false,
    locale: session.locale as Stripe.Checkout.Session.Locale | null,
    metadata: { ...session.metadata },
    mode: 'payment',
    payment_intent: session.paymentIntent,
    payment_method_types: ['card'],
    payment_status: session.paymentStatus,
    status: session.status,
    submit_type: session.submitType as Stripe.Checkout.Session.SubmitType | null,
    success_url: session.successUrl,
    total_details: { amount_discount: 0, amount_shipping: 0, amount_tax: 0 },
    ui_mode: 'hosted_page',
    url: session.status === 'open' ? `${service.apiUrl}/pay/${session.id}` : null,
  };
}

/** Parts of the published object that a plain card payment leaves empty. */
function unused() {
  return {
    after_expiration: null,
    allow_promotion_codes: null,
    automatic_tax: { enabled: false, liability: null, provider: null, status: null },
    billing_address_collection: null,
    client_secret: null,
    collected_information: null,
    consent: null,
    consent_collection: null,
    currency_conversion: null,
    custom_fields: [],
    custom_text: {
      after_submit: null,
      shipping_address: null,
      submit: null,
      terms_of_service_acceptance: null,
    },
    customer_account: null,
    customer_creation: 'if_required' as const,
    discounts: [],
    integration_identifier: null,
    invoice: null,
    invoice_creation: null,
    managed_payments: null,
    origin_context: null,
    payment_link: null,
    payment_method_collection: 'if_required' as const,
    payment_method_configuration_details: null,
    payment_method_options: {},
    permissions: null,
    recovered_from: null,
    saved_payment_method_options: null,
    setup_intent: null,
    shipping_address_collection: null,
    shipping_cost: null,
    shipping_options: [],
    subscription: null,
    wallet_options: null,
  };
}

function customerDetails({
  payer,
  customerEmail,
}: SessionRecord): Stripe.Checkout.Session.CustomerDetails | null {
  if (payer === null && customerEmail === null) return null;
  return {
    address: null,
    business_name: null,
    email: payer?.email ?? customerEmail,
    individual_name: null,
    name: payer?.name ?? null,
    phone: null,
    tax_exempt: 'none',
    tax_ids: [],
  };
}

/** One line of a session; shown only where line items are asked for. */
export function presentLineItem(session: SessionRecord, item: LineItem): Stripe.LineItem {
  const total = item.unitAmount * item.quantity;
  return {
    id: item.id,
    object: 'item',
    adjustable_quantity: null,
    amount_discount: 0,
    amount_subtotal: total,
    amount_tax: 0,
    amount_total: total,
    currency: session.currency,
    description: item.name,
    metadata: {},
    price: {
      id: item.priceId,
      object: 'price',
      active: false,
      billing_scheme: 'per_unit',
      created: session.created,
      currency: session.currency,
      custom_unit_amount: null,
      livemode: false,
      lookup_key: null,
      metadata: {},
      nickname: null,
      product: item.productId,
      recurring: null,
      tax_behavior: 'unspecified',
      tiers_mode: null,
      transform_quantity: null,
      type: 'one_time',
      unit_amount: item.unitAmount,
      unit_amount_decimal: null,
    },
    quantity: item.quantity,
  };
}
