import { DAY_MS, SECOND_MS } from '#stand-ins/stripe-mock/clock/clock';
import { balances } from '#stand-ins/stripe-mock/objects/balance';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import { coversType } from '#stand-ins/stripe-mock/webhooks/event-faults';
import { noSuch } from './errors.ts';
import { asked, listRecords, PAGE } from './lists.ts';
import { boolean, listOf, required, text, timeRange, within } from './parameters.ts';
import { route } from './route.ts';

const ROWS = '/v1/balance_transactions';
const PAYOUTS = '/v1/payouts';
const EVENTS = '/v1/events';

/** Events can be listed for thirty days. */
const EVENTS_KEPT_SECONDS = (30 * DAY_MS) / SECOND_MS;

export const bookRoutes = [
  route('GET', '/v1/balance', {}, (service) => {
    const all = balances(service);
    const amounts = (which: 'available' | 'pending') =>
      all.map((balance) => ({
        amount: balance[which],
        currency: balance.currency,
        source_types: { card: balance[which] },
      }));
    return {
      object: 'balance',
      available: amounts('available'),
      livemode: false,
      pending: amounts('pending'),
    };
  }),
  route(
    'GET',
    ROWS,
    { ...PAGE, created: timeRange(), currency: text(3), payout: text(), source: text(), type: text() },
    (service, filter) => {
      if (filter.payout !== undefined && service.store.find('payouts', filter.payout) === undefined) {
        throw noSuch('payout', filter.payout, 'payout');
      }
      return listRecords(
        service,
        'balanceTransactions',
        { url: ROWS, noun: 'balance_transaction', page: filter },
        (row) =>
          within(filter.created, row.created) &&
          asked(filter.currency, row.currency) &&
          asked(filter.payout, row.payoutId) &&
          asked(filter.source, row.source) &&
          asked(filter.type, row.type),
      );
    },
  ),
  route('GET', `${ROWS}/:id`, {}, (service, _, id) => {
    const row = service.store.find('balanceTransactions', id);
    if (row === undefined) throw noSuch('balance_transaction', id);
    return present(service, 'balanceTransactions', row);
  }),
  route(
    'GET',
    PAYOUTS,
    { ...PAGE, created: timeRange(), arrival_date: timeRange(), status: text() },
    (service, filter) =>
      listRecords(
        service,
        'payouts',
        { url: PAYOUTS, noun: 'payout', page: filter },
        (payout) =>
          within(filter.created, payout.created) &&
          within(filter.arrival_date, payout.arrivalDate) &&
          asked(filter.status, payout.status),
      ),
  ),
  route('GET', `${PAYOUTS}/:id`, {}, (service, _, id) => {
    const payout = service.store.find('payouts', id);
    if (payout === undefined) throw noSuch('payout', id, 'payout');
    return present(service, 'payouts', payout);
  }),
  route(
    'GET',
    EVENTS,
    {
      ...PAGE,
      created: timeRange(),
      type: text(),
      types: listOf(required(text())),
      delivery_success: boolean(),
    },
    (service, filter) => {
      const oldest = service.clock.nowSeconds() - EVENTS_KEPT_SECONDS;
      const undelivered = new Set(
        service.store
          .all('deliveries')
          .filter((delivery) => delivery.state !== 'delivered')
          .map((delivery) => delivery.eventId),
      );
      const types = filter.types ?? (filter.type === undefined ? ['*'] : [filter.type]);
      return listRecords(
        service,
        'events',
        { url: EVENTS, noun: 'event', page: filter },
        (event) =>
          event.created >= oldest &&
          within(filter.created, event.created) &&
          types.some((type) => coversType(type, event.type)) &&
          asked(filter.delivery_success, !undelivered.has(event.id)),
      );
    },
  ),
  route('GET', `${EVENTS}/:id`, {}, (service, _, id) => {
    const event = service.store.find('events', id);
    if (event === undefined) throw noSuch('event', id);
    return present(service, 'events', event);
  }),
];
