import type { Logger } from '#server/platform/log';

/** Something done again and again; one run at a time in this process. */
export interface Job {
  readonly name: string;
  readonly everyMs: number;
  /** Returns how much it did; anything above zero is followed by another run at once. */
  run(): Promise<number>;
}

export interface RunningLoop {
  /** Stops after the run under way. */
  stop(): Promise<void>;
}

/** Runs a job until it is stopped. A failing run is logged and tried again after a growing pause. */
export function startLoop(job: Job, log: Logger): RunningLoop {
  let stopping = false;
  let wake: () => void = () => undefined;
  const pause = (ms: number): Promise<void> =>
    new Promise((resolve) => {
      const timer = setTimeout(resolve, ms);
      wake = () => {
        clearTimeout(timer);
        resolve();
      };
    });
  const work = async (): Promise<void> => {
    let failures = 0;
    while (!stopping) {
      try {
        const done = await job.run();
        failures = 0;
        if (done === 0) await pause(job.everyMs);
      } catch (error) {
        failures += 1;
        log.warn(
          { job: job.name, failures, reason: error instanceof Error ? error.name : 'unknown' },
          'job failed, will run again',
        );
        await pause(Math.min(60_000, job.everyMs * 2 ** Math.min(failures, 6)));
      }
    }
  };
  const running = work();
  return {
    async stop() {
      stopping = true;
      wake();
      await running;
    },
  };
}
