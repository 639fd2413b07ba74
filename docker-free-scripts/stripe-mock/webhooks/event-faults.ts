import type { Service } from '#stand-ins/stripe-mock/service';
import type { EventFaultRecord } from '#stand-ins/stripe-mock/state/records';

/** Whether a pattern (`refund.failed`, `refund.*` or `*`) covers an event type. */
export function coversType(pattern: string, type: string): boolean {
  if (pattern === '*') return true;
  return pattern.endsWith('.*') ? type.startsWith(pattern.slice(0, -1)) : pattern === type;
}

/** The faults that hit this event; each of them is used up by one. */
export function takeEventFaults(service: Service, type: string): EventFaultRecord[] {
  const hits = service.store.all('eventFaults').filter((fault) => coversType(fault.eventType, type));
  for (const fault of hits) {
    if (fault.timesLeft > 1) service.store.put('eventFaults', { ...fault, timesLeft: fault.timesLeft - 1 });
    else service.store.remove('eventFaults', fault.id);
  }
  return hits;
}
