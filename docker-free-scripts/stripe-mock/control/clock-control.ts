import type { Queue } from '#stand-ins/stripe-mock/clock/queue';
import { planDailyPayout } from '#stand-ins/stripe-mock/objects/payouts';
import type { Service } from '#stand-ins/stripe-mock/service';

export interface ClockReading {
  readonly now: string;
  readonly frozen: boolean;
}

export function readClock({ clock }: Service): ClockReading {
  return { now: new Date(clock.nowMs()).toISOString(), frozen: clock.frozen };
}

/** Puts the clock somewhere. Forward, all that falls due on the way happens on the way; back, nothing happens. */
export async function setClock(
  service: Service,
  queue: Queue,
  toMs: number,
  frozen: boolean,
): Promise<ClockReading> {
  await queue.moveTo(toMs, () => service.clock.place(toMs, frozen));
  planFrom(service);
  return readClock(service);
}

export async function advanceClock(service: Service, queue: Queue, byMs: number): Promise<ClockReading> {
  return setClock(service, queue, service.clock.nowMs() + byMs, service.clock.frozen);
}

/** Back to the machine's time, with all that falls due on the way. */
export async function resetClock(service: Service, queue: Queue): Promise<ClockReading> {
  await queue.moveTo(Date.now(), () => service.clock.release());
  planFrom(service);
  return readClock(service);
}

/** After a move back the next payout is no longer tomorrow's from where the clock came. */
function planFrom(service: Service): void {
  service.store.transact(() => planDailyPayout(service));
}
