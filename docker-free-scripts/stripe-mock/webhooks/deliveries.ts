import { DAY_MS, HOUR_MS, MINUTE_MS, SECOND_MS } from '#stand-ins/stripe-mock/clock/clock';
import { schedule, unschedule } from '#stand-ins/stripe-mock/clock/tasks';
import type { Service } from '#stand-ins/stripe-mock/service';
import { settingsOf, stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type {
  DeliveryAttempt,
  DeliveryRecord,
  EventFaultKind,
  EventRecord,
  Hold,
} from '#stand-ins/stripe-mock/state/records';
import { coversType, takeEventFaults } from './event-faults.ts';

/** Pauses after a failed try: soon at first, for a receiver that is just starting, then ever longer. */
const PAUSES_MS = [
  5 * SECOND_MS,
  MINUTE_MS,
  5 * MINUTE_MS,
  30 * MINUTE_MS,
  2 * HOUR_MS,
  5 * HOUR_MS,
  10 * HOUR_MS,
];
const LONGEST_PAUSE_MS = 12 * HOUR_MS;
const GIVE_UP_AFTER_MS = 3 * DAY_MS;

/** Plans to tell the receiver of an event, with whatever faults were ordered for its type. */
export function planDeliveries(service: Service, event: EventRecord): void {
  if (settingsOf(service).webhookUrl === null) return;
  const faults = takeEventFaults(service, event.type);
  const ordered = (kind: EventFaultKind) => faults.find((fault) => fault.kind === kind);
  if (ordered('drop')) return;
  const plan = {
    hold: holdOf(service, ordered),
    twist: ordered('stale_timestamp') ? 'stale_timestamp' : ordered('wrong_secret') ? 'wrong_secret' : null,
    delayMs: ordered('delay')?.delayMs ?? 0,
  } as const;
  planOne(service, event, plan);
  if (ordered('duplicate_same_id')) planOne(service, event, plan);
  if (ordered('duplicate_new_id')) {
    const twin = service.store.put('events', { ...event, ...stamp(service, newId('evt')) });
    planOne(service, twin, plan);
  }
}

function holdOf(service: Service, ordered: (kind: EventFaultKind) => unknown): Hold | null {
  if (ordered('hold')) return 'until_released';
  if (ordered('reorder')) return 'until_a_later_event_went_out';
  return service.payersUnderway > 0 ? 'until_redirected' : null;
}

interface Plan {
  readonly hold: Hold | null;
  readonly twist: DeliveryRecord['twist'];
  readonly delayMs: number;
}

function planOne(service: Service, event: EventRecord, { hold, twist, delayMs }: Plan): void {
  const delivery = service.store.put('deliveries', {
    ...stamp(service, newId('whd')),
    eventId: event.id,
    state: hold === null ? 'waiting' : 'held',
    hold,
    twist,
    attempts: [],
  });
  if (hold === null) schedule(service, 'deliver', delivery.id, service.clock.nowMs() + delayMs);
}

/** Lets held deliveries go that `which` picks; returns how many. */
export function release(service: Service, which: (delivery: DeliveryRecord) => boolean): number {
  return service.store.transact(() => {
    const freed = service.store
      .all('deliveries')
      .filter((delivery) => delivery.state === 'held' && which(delivery));
    for (const delivery of freed) {
      service.store.put('deliveries', { ...delivery, state: 'waiting', hold: null });
      schedule(service, 'deliver', delivery.id, service.clock.nowMs());
    }
    return freed.length;
  });
}

/** @param typePattern an event type, a group such as `refund.*`, or `*` */
export function releaseByType(service: Service, typePattern: string): number {
  return release(service, ({ eventId }) =>
    coversType(typePattern, service.store.get('events', eventId).type),
  );
}

/** What was delivered or given up already is left alone; everything waiting goes out now. */
export function retryNow(service: Service): number {
  return service.store.transact(() => {
    const waiting = service.store.all('deliveries').filter((delivery) => delivery.state === 'waiting');
    for (const delivery of waiting) {
      unschedule(service, 'deliver', delivery.id);
      schedule(service, 'deliver', delivery.id, service.clock.nowMs());
    }
    return waiting.length;
  });
}

/** Writes down how a try ended and plans the next one, unless it arrived or three days have passed. */
export function recordAttempt(service: Service, delivery: DeliveryRecord, attempt: DeliveryAttempt): void {
  service.store.transact(() => {
    unschedule(service, 'deliver', delivery.id);
    const attempts = [...delivery.attempts, attempt];
    const arrived = attempt.status !== null && attempt.status >= 200 && attempt.status < 300;
    const retryAtMs = attempt.atMs + (PAUSES_MS[attempts.length - 1] ?? LONGEST_PAUSE_MS);
    const over = retryAtMs > delivery.created * SECOND_MS + GIVE_UP_AFTER_MS;
    const state = arrived ? 'delivered' : over ? 'given_up' : 'waiting';
    service.store.put('deliveries', { ...delivery, attempts, state });
    if (state === 'waiting') schedule(service, 'deliver', delivery.id, retryAtMs);
    release(service, (other) => other.hold === 'until_a_later_event_went_out' && other.seq < delivery.seq);
  });
}
