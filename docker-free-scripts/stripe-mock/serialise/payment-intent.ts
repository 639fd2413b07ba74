import type Stripe from 'stripe';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { IntentRecord } from '#stand-ins/stripe-mock/state/records';
import { presentCard } from './card.ts';

export function presentIntent(service: Service, intent: IntentRecord): Stripe.PaymentIntent {
  return {
    id: intent.id,
    object: 'payment_intent',
    allowed_payment_method_types: ['card'],
    amount: intent.amount,
    amount_capturable: 0,
    amount_details: { tip: {} },
    amount_received: intent.status === 'succeeded' ? intent.amount : 0,
    application: null,
    application_fee_amount: null,
    automatic_payment_methods: null,
    canceled_at: intent.canceledAt,
    cancellation_reason: intent.canceledAt === null ? null : 'expired',
    capture_method: 'automatic_async',
    client_secret: intent.clientSecret,
    confirmation_method: 'automatic',
    created: intent.created,
    currency: intent.currency,
    customer: intent.customer,
    customer_account: null,
    description: intent.description,
    excluded_payment_method_types: null,
    last_payment_error: lastError(service, intent),
    latest_charge: intent.latestCharge,
    livemode: false,
    managed_payments: null,
    metadata: { ...intent.metadata },
    next_action: nextAction(service, intent),
    on_behalf_of: null,
    payment_method: intent.paymentMethod,
    payment_method_configuration_details: null,
    payment_method_options: {
      card: { installments: null, mandate_options: null, network: null, request_three_d_secure: 'automatic' },
    },
    payment_method_types: ['card'],
    payment_record: null,
    processing: null,
    receipt_email: intent.receiptEmail,
    review: null,
    setup_future_usage: null,
    shipping: null,
    source: null,
    statement_descriptor: null,
    statement_descriptor_suffix: null,
    status: intent.status,
    transfer_group: null,
  };
}

function lastError(service: Service, intent: IntentRecord): Stripe.PaymentIntent.LastPaymentError | null {
  const failure = intent.lastFailure;
  if (failure === null) return null;
  return {
    ...(failure.charge === null ? {} : { charge: failure.charge }),
    code: failure.code as Stripe.PaymentIntent.LastPaymentError.Code,
    ...(failure.declineCode === null ? {} : { decline_code: failure.declineCode }),
    message: failure.message,
    ...(failure.param === null ? {} : { param: failure.param }),
    payment_method: presentCard(service, service.store.get('cards', failure.paymentMethod)),
    type: failure.charge === null ? 'invalid_request_error' : 'card_error',
  };
}

function nextAction(service: Service, intent: IntentRecord): Stripe.PaymentIntent.NextAction | null {
  if (intent.status !== 'requires_action') return null;
  const page = `${service.apiUrl}/pay/${intent.sessionId}`;
  return { type: 'redirect_to_url', redirect_to_url: { return_url: page, url: `${page}/authenticate` } };
}
