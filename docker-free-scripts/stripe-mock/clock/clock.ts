import type { ClockRecord } from '#stand-ins/stripe-mock/state/records';
import type { Store } from '#stand-ins/stripe-mock/state/store';

const ID = 'clock';
const REAL: ClockRecord = { id: ID, seq: 0, created: 0, offsetMs: 0, frozenAtMs: null };

export const SECOND_MS = 1_000;
export const MINUTE_MS = 60 * SECOND_MS;
export const HOUR_MS = 60 * MINUTE_MS;
export const DAY_MS = 24 * HOUR_MS;

/**
 * The service's own time. It is the machine's time until set; once set it runs on from the instant given, or
 * stands still when frozen. The position is state like any other and survives a restart.
 */
export class Clock {
  readonly #store: Store;
  #asOfMs: number | null = null;

  constructor(store: Store) {
    this.#store = store;
  }

  nowMs(): number {
    if (this.#asOfMs !== null) return this.#asOfMs;
    const { frozenAtMs, offsetMs } = this.#record();
    return frozenAtMs ?? Date.now() + offsetMs;
  }

  /** Unix seconds, as every published object counts time. */
  nowSeconds(): number {
    return Math.floor(this.nowMs() / SECOND_MS);
  }

  get frozen(): boolean {
    return this.#record().frozenAtMs !== null;
  }

  /** Puts the clock at `atMs`, from where it runs on unless `frozen`. Nothing due is run here. */
  place(atMs: number, frozen: boolean): void {
    const record = { ...REAL, offsetMs: atMs - Date.now(), frozenAtMs: frozen ? atMs : null };
    this.#store.transact(() => this.#store.put('clock', record));
  }

  /** Back to the machine's time. */
  release(): void {
    this.#store.transact(() => this.#store.put('clock', REAL));
  }

  /** Lets `work` see the instant it was due at, so that what is done late still bears its right date. */
  asOf<T>(atMs: number, work: () => T): T {
    const outer = this.#asOfMs;
    this.#asOfMs = atMs;
    try {
      return work();
    } finally {
      this.#asOfMs = outer;
    }
  }

  #record(): ClockRecord {
    return this.#store.find('clock', ID) ?? REAL;
  }
}
