import type Stripe from 'stripe';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { CustomerRecord } from '#stand-ins/stripe-mock/state/records';

export function presentCustomer(_service: Service, customer: CustomerRecord): Stripe.Customer {
  return {
    id: customer.id,
    object: 'customer',
    address: null,
    balance: 0,
    created: customer.created,
    currency: null,
    default_source: null,
    delinquent: false,
    description: customer.description,
    discount: null,
    email: customer.email,
    invoice_settings: {
      custom_fields: null,
      default_payment_method: null,
      footer: null,
      rendering_options: null,
    },
    livemode: false,
    metadata: { ...customer.metadata },
    name: customer.name,
    phone: customer.phone,
    preferred_locales: [],
    shipping: null,
    tax_exempt: 'none',
    test_clock: null,
  };
}
