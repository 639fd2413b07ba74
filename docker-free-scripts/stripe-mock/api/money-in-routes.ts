import { present } from '#stand-ins/stripe-mock/serialise/present';
import { stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import { noSuch } from './errors.ts';
import { asked, listRecords, PAGE } from './lists.ts';
import { mergeMetadata, metadata, text, timeRange, within } from './parameters.ts';
import { route } from './route.ts';

const INTENTS = '/v1/payment_intents';
const CHARGES = '/v1/charges';
const CUSTOMERS = '/v1/customers';

export const moneyInRoutes = [
  route('GET', INTENTS, { ...PAGE, created: timeRange(), customer: text() }, (service, filter) =>
    listRecords(
      service,
      'intents',
      { url: INTENTS, noun: 'payment_intent', page: filter },
      (intent) => within(filter.created, intent.created) && asked(filter.customer, intent.customer),
    ),
  ),
  route('GET', `${INTENTS}/:id`, {}, (service, _, id) => {
    const intent = service.store.find('intents', id);
    if (intent === undefined) throw noSuch('payment_intent', id, 'intent');
    return present(service, 'intents', intent);
  }),
  route(
    'GET',
    CHARGES,
    { ...PAGE, created: timeRange(), customer: text(), payment_intent: text() },
    (service, filter) =>
      listRecords(
        service,
        'charges',
        { url: CHARGES, noun: 'charge', page: filter },
        (charge) =>
          within(filter.created, charge.created) &&
          asked(filter.customer, charge.customer) &&
          asked(filter.payment_intent, charge.intentId),
      ),
  ),
  route('GET', `${CHARGES}/:id`, {}, (service, _, id) => {
    const charge = service.store.find('charges', id);
    if (charge === undefined) throw noSuch('charge', id);
    return present(service, 'charges', charge);
  }),
  route(
    'POST',
    CUSTOMERS,
    { email: text(512), name: text(256), description: text(), phone: text(), metadata: metadata() },
    (service, parameters) => {
      const customer = service.store.put('customers', {
        ...stamp(service, newId('cus')),
        email: parameters.email ?? null,
        name: parameters.name ?? null,
        description: parameters.description ?? null,
        phone: parameters.phone ?? null,
        metadata: mergeMetadata({}, parameters.metadata),
      });
      return present(service, 'customers', customer);
    },
  ),
  route('GET', `${CUSTOMERS}/:id`, {}, (service, _, id) => {
    const customer = service.store.find('customers', id);
    if (customer === undefined) throw noSuch('customer', id);
    return present(service, 'customers', customer);
  }),
];
