import { isDeepStrictEqual } from 'node:util';
import type { PublicKind } from '#stand-ins/stripe-mock/serialise/present';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import { stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type { Collections, EventRecord, JsonObject } from '#stand-ins/stripe-mock/state/records';
import { planDeliveries } from './deliveries.ts';

/**
 * Records that something happened to an object, with the object as it is now, and plans to tell the receiver.
 * Call inside the transaction of the change.
 *
 * @param before the object as it was presented before the change; what differs becomes `previous_attributes`
 */
export function emit<K extends PublicKind>(
  service: Service,
  type: string,
  kind: K,
  record: Collections[K],
  before?: JsonObject,
): EventRecord {
  const object = present(service, kind, record);
  const event = service.store.put('events', {
    ...stamp(service, newId('evt')),
    type,
    object,
    previousAttributes: before === undefined ? null : changed(before, object),
    request: service.request,
  });
  planDeliveries(service, event);
  return event;
}

function changed(before: JsonObject, after: JsonObject): JsonObject {
  const names = new Set([...Object.keys(before), ...Object.keys(after)]);
  const differing = [...names].filter((name) => !isDeepStrictEqual(before[name], after[name]));
  return Object.fromEntries(differing.map((name) => [name, before[name] ?? null]));
}
