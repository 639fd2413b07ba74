import type { Service } from '#stand-ins/stripe-mock/service';
import type { TaskRecord } from '#stand-ins/stripe-mock/state/records';
import { nextDue } from './tasks.ts';

export interface TaskRunners {
  /** Changes state at once; runs in the transaction that takes the task off the queue. */
  readonly settle: (task: TaskRecord) => void;
  /** Talks to the outside; must take its task off the queue itself, whatever comes of it. */
  readonly deliver: (task: TaskRecord, stopping: AbortSignal) => Promise<void>;
}

const TICK_MS = 250;
const isDelivery = (task: TaskRecord) => task.kind === 'deliver';

/**
 * Runs what is due, in order of time. Changes of state never wait for the outside world: deliveries go out one
 * after the other on a line of their own, so that a receiver that hangs holds up later deliveries only.
 */
export class Queue {
  readonly #service: Service;
  readonly #runners: TaskRunners;
  #timer: NodeJS.Timeout | undefined;
  #deliveries: Promise<void> | null = null;
  #moves: Promise<unknown> = Promise.resolve();
  readonly #stopping = new AbortController();
  #woken = false;

  constructor(service: Service, runners: TaskRunners) {
    this.#service = service;
    this.#runners = runners;
    service.wake = () => this.#wakeSoon();
  }

  start(): void {
    this.#timer = setInterval(() => this.#runDue(), TICK_MS);
    this.#runDue();
  }

  /** Stops taking tasks up; breaks off the delivery under way, which the next start repeats. */
  async stop(): Promise<void> {
    this.#stopping.abort();
    clearInterval(this.#timer);
    await this.#moves;
    await this.#deliveries;
  }

  /** Resolves when nothing due is left, deliveries included. */
  async idle(): Promise<void> {
    do {
      this.#runDue();
      await this.#deliveries;
    } while (!this.#stopping.signal.aborted && this.#nextTask(this.#service.clock.nowMs()) !== undefined);
  }

  /**
   * Moves the clock to `toMs`, pausing at every instant at which something is due, so that each task and each
   * delivery sees its own time. A move back runs nothing. `arrive` leaves the clock in its final position.
   */
  moveTo(toMs: number, arrive: () => void): Promise<void> {
    const move = this.#moves.then(async () => {
      await this.idle();
      for (;;) {
        const task = this.#nextTask(toMs);
        if (task === undefined || this.#stopping.signal.aborted) break;
        this.#service.clock.place(Math.max(task.dueAtMs, this.#service.clock.nowMs()), true);
        await this.idle();
      }
      arrive();
      await this.idle();
    });
    this.#moves = move.catch(() => {});
    return move;
  }

  #wakeSoon(): void {
    if (this.#woken) return;
    this.#woken = true;
    setImmediate(() => {
      this.#woken = false;
      this.#runDue();
    });
  }

  #nextTask(untilMs: number): TaskRecord | undefined {
    return nextDue(this.#service, untilMs, () => true);
  }

  #runDue(): void {
    if (this.#stopping.signal.aborted) return;
    const { clock, store } = this.#service;
    for (;;) {
      const task = nextDue(this.#service, clock.nowMs(), (candidate) => !isDelivery(candidate));
      if (task === undefined) break;
      clock.asOf(task.dueAtMs, () =>
        store.transact(() => {
          store.remove('tasks', task.id);
          this.#runners.settle(task);
        }),
      );
    }
    this.#deliveries ??= this.#deliverDue().finally(() => {
      this.#deliveries = null;
    });
  }

  async #deliverDue(): Promise<void> {
    for (;;) {
      const task = nextDue(this.#service, this.#service.clock.nowMs(), isDelivery);
      if (task === undefined || this.#stopping.signal.aborted) break;
      await this.#runners.deliver(task, this.#stopping.signal);
    }
  }
}
