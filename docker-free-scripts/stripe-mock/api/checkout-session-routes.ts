import {
  GREATEST_CHARGE,
  isKnownCurrency,
  leastCharge,
  readableAmount,
  wrongEnding,
} from '#stand-ins/stripe-mock/objects/currencies';
import { expireSession, openSession, totalOf } from '#stand-ins/stripe-mock/objects/sessions';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import { presentLineItem } from '#stand-ins/stripe-mock/serialise/session';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { SessionRecord } from '#stand-ins/stripe-mock/state/records';
import { noSuch, ParameterError, refused } from './errors.ts';
import { asked, listBody, listRecords, PAGE, pageOf } from './lists.ts';
import {
  boolean,
  integer,
  listOf,
  mergeMetadata,
  metadata,
  object,
  oneOf,
  type Read,
  required,
  text,
  timeRange,
  within,
} from './parameters.ts';
import { route } from './route.ts';

const URL = '/v1/checkout/sessions';
const NOUN = 'checkout.session';

const LINE_ITEM = {
  quantity: required(integer({ least: 1 })),
  price_data: required(
    object({
      currency: required(text(3)),
      unit_amount: required(integer({ least: 0 })),
      product_data: required(object({ name: required(text()), description: text(), metadata: metadata() })),
    }),
  ),
};

/** The parameters a plain card payment needs; the service knows more, the stand-in refuses them by name. */
const CREATE = {
  mode: oneOf('payment'),
  ui_mode: oneOf('hosted_page'),
  allowed_payment_method_types: listOf(required(oneOf('card'))),
  adaptive_pricing: object({ enabled: boolean() }),
  line_items: required(listOf(required(object(LINE_ITEM)))),
  currency: text(3),
  success_url: required(text()),
  cancel_url: text(),
  client_reference_id: text(200),
  customer: text(),
  customer_email: text(),
  expires_at: integer(),
  locale: text(),
  submit_type: oneOf('auto', 'book', 'donate', 'pay'),
  metadata: metadata(),
  payment_intent_data: object({ metadata: metadata(), description: text(), receipt_email: text() }),
};

type CreateParameters = Read<typeof CREATE>;

const SHORTEST_LIFE_SECONDS = 30 * 60;
const LONGEST_LIFE_SECONDS = 24 * 60 * 60;

export const checkoutSessionRoutes = [
  route('POST', URL, CREATE, (service, parameters) => {
    const items = parameters.line_items.map(({ quantity, price_data }) => ({
      name: price_data.product_data.name,
      unitAmount: price_data.unit_amount,
      quantity,
    }));
    const { customer = null, payment_intent_data: intentData } = parameters;
    if (customer !== null && service.store.find('customers', customer) === undefined) {
      throw noSuch('customer', customer, 'customer', 400);
    }
    const session = openSession(service, {
      items,
      currency: currencyOf(parameters, totalOf(items)),
      expiresAt: expiryOf(service, parameters.expires_at),
      successUrl: webAddress(parameters.success_url, 'success_url'),
      cancelUrl: parameters.cancel_url === undefined ? null : webAddress(parameters.cancel_url, 'cancel_url'),
      clientReferenceId: parameters.client_reference_id ?? null,
      customer,
      customerEmail: parameters.customer_email ?? service.store.find('customers', customer)?.email ?? null,
      metadata: mergeMetadata({}, parameters.metadata),
      intentMetadata: intentData === undefined ? {} : mergeMetadata({}, intentData.metadata),
      intentDescription: intentData?.description ?? null,
      receiptEmail: intentData?.receipt_email ?? null,
      locale: parameters.locale ?? null,
      submitType: parameters.submit_type ?? null,
      allowedPaymentMethodTypes: parameters.allowed_payment_method_types ?? null,
      adaptivePricing: parameters.adaptive_pricing?.enabled ?? false,
    });
    return present(service, 'sessions', session);
  }),
  route(
    'GET',
    URL,
    {
      ...PAGE,
      created: timeRange(),
      customer: text(),
      customer_details: object({ email: required(text()) }),
      payment_intent: text(),
      status: oneOf('complete', 'expired', 'open'),
    },
    (service, filter) =>
      listRecords(
        service,
        'sessions',
        { url: URL, noun: NOUN, page: filter },
        (session) =>
          within(filter.created, session.created) &&
          asked(filter.customer, session.customer) &&
          asked(filter.payment_intent, session.paymentIntent) &&
          asked(filter.status, session.status) &&
          (asked(filter.customer_details?.email, session.payer?.email) ||
            asked(filter.customer_details?.email, session.customerEmail)),
      ),
  ),
  route('GET', `${URL}/:id`, {}, (service, _, id) => present(service, 'sessions', sessionOf(service, id))),
  route('POST', `${URL}/:id/expire`, {}, (service, _, id) =>
    present(service, 'sessions', expireSession(service, sessionOf(service, id))),
  ),
  route('GET', `${URL}/:id/line_items`, PAGE, (service, page, id) => {
    const session = sessionOf(service, id);
    const { items, hasMore } = pageOf(session.lineItems, page, 'item');
    const shown = items.map((item) => presentLineItem(session, item));
    return listBody(`${URL}/${id}/line_items`, { items: shown, hasMore });
  }),
];

function sessionOf(service: Service, id: string): SessionRecord {
  const session = service.store.find('sessions', id);
  if (session === undefined) throw noSuch(NOUN, id, 'session');
  return session;
}

function currencyOf({ line_items, currency }: CreateParameters, total: number): string {
  const named = line_items[0]?.price_data.currency.toLowerCase() ?? currency?.toLowerCase() ?? '';
  line_items.forEach(({ price_data }, index) => {
    const param = `line_items[${index}][price_data]`;
    if (price_data.currency.toLowerCase() !== named) {
      throw new ParameterError(
        `${param}[currency]`,
        'parameter_invalid',
        'All line items must have the same currency.',
      );
    }
    const ending = wrongEnding(price_data.unit_amount, named);
    if (ending !== null) {
      throw refused(`Amounts in ${named} ${ending}.`, {
        param: `${param}[unit_amount]`,
        code: 'parameter_invalid_integer',
      });
    }
  });
  if (!isKnownCurrency(named))
    throw refused(`Invalid currency: ${named}.`, { param: 'line_items[0][price_data][currency]' });
  const least = leastCharge(named);
  if (total < least) {
    throw refused(
      `The Checkout Session's total amount due must add up to at least ${readableAmount(least, named)}`,
      {
        code: 'amount_too_small',
      },
    );
  }
  if (total > GREATEST_CHARGE) {
    throw refused(
      `The Checkout Session's total amount must be no more than ${readableAmount(GREATEST_CHARGE, named)}`,
      {
        code: 'amount_too_large',
      },
    );
  }
  return named;
}

function expiryOf(service: Service, wanted: number | undefined): number {
  const now = service.clock.nowSeconds();
  const expiry = wanted ?? now + LONGEST_LIFE_SECONDS;
  if (expiry < now + SHORTEST_LIFE_SECONDS || expiry > now + LONGEST_LIFE_SECONDS) {
    throw refused(
      'The `expires_at` timestamp must be between 30 minutes and 24 hours from Checkout Session creation.',
      {
        param: 'expires_at',
      },
    );
  }
  return expiry;
}

function webAddress(address: string, param: string): string {
  if (!/^https?:\/\//.test(address) || !globalThis.URL.canParse(address)) {
    throw refused('Not a valid URL', { param, code: 'url_invalid' });
  }
  return address;
}
