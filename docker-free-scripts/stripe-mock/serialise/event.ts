import type Stripe from 'stripe';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { EventRecord, JsonObject } from '#stand-ins/stripe-mock/state/records';

export const API_VERSION = '2026-10-28.endive';

/** The members all events share; which object an event carries depends on its type, as in `Stripe.Event`. */
type EventEnvelope = Omit<Stripe.EventBase, 'data' | 'type'> & {
  readonly type: string;
  readonly data: { readonly object: JsonObject; readonly previous_attributes?: JsonObject };
};

export function presentEvent(service: Service, event: EventRecord): EventEnvelope {
  const undelivered = service.store
    .all('deliveries')
    .filter((delivery) => delivery.eventId === event.id && delivery.state !== 'delivered');
  return {
    id: event.id,
    object: 'event',
    api_version: API_VERSION,
    created: event.created,
    data: {
      object: event.object,
      ...(event.previousAttributes === null ? {} : { previous_attributes: event.previousAttributes }),
    },
    livemode: false,
    pending_webhooks: undelivered.length,
    request: event.request && {
      id: event.request.id,
      idempotency_key: event.request.idempotencyKey,
    },
    type: event.type,
  };
}
