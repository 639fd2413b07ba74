import { addMs, type Instant, instantOfMs } from '#domain/time/index';

/** The only source of "now". Injected, so that seeds and tests choose the day. */
export interface Clock {
  now(): Instant;
}

/** The machine's clock. */
export const systemClock: Clock = { now: () => instantOfMs(Date.now()) };

/** A clock that stands still until told otherwise: for seeds and tests. */
export interface SteppedClock extends Clock {
  set(at: Instant): void;
  advance(ms: number): void;
}

/** Makes a clock that starts at `at` and moves only by `set` and `advance`. */
export function steppedClock(at: Instant): SteppedClock {
  let current = at;
  return {
    now: () => current,
    set: (next) => {
      current = next;
    },
    advance: (ms) => {
      current = addMs(current, ms);
    },
  };
}
