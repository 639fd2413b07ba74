/** How a draft stands towards the server. */
export type SaveState = 'saved' | 'unsaved' | 'saving' | 'failed' | 'conflict';

export interface SaveOutcome {
  readonly version: number;
}

export interface Autosave<Draft> {
  /** Takes note of a change; it is saved once the typing rests. */
  change(draft: Draft): void;
  /** Saves at once what is not saved yet; resolves with the newest version, or undefined when it could not be saved. */
  flush(): Promise<number | undefined>;
  stop(): void;
}

interface Options<Draft> {
  readonly version: number;
  readonly restMs: number;
  save(draft: Draft, version: number): Promise<SaveOutcome>;
  /** True for a refusal that saving again would only repeat. */
  isConflict(error: unknown): boolean;
  onState(state: SaveState, error?: unknown): void;
}

/**
 * Saves a draft while it is being typed: one request at a time, each on the version the last one gave, and after a conflict none at
 * all until a person has decided.
 */
export function createAutosave<Draft>(options: Options<Draft>): Autosave<Draft> {
  let { version } = options;
  let waiting: { draft: Draft } | undefined;
  let timer: ReturnType<typeof setTimeout> | undefined;
  let running: Promise<void> | undefined;
  let conflicted = false;
  let stopped = false;

  async function saveWaiting(): Promise<void> {
    while (waiting && !conflicted && !stopped) {
      const { draft } = waiting;
      waiting = undefined;
      options.onState('saving');
      try {
        ({ version } = await options.save(draft, version));
        if (!waiting) options.onState('saved');
      } catch (error) {
        waiting ??= { draft };
        conflicted = options.isConflict(error);
        options.onState(conflicted ? 'conflict' : 'failed', error);
        return;
      }
    }
  }

  function run(): Promise<void> {
    clearTimeout(timer);
    running ??= saveWaiting().finally(() => {
      running = undefined;
    });
    return running;
  }

  return {
    change(draft) {
      waiting = { draft };
      if (conflicted || stopped) return;
      options.onState('unsaved');
      clearTimeout(timer);
      timer = setTimeout(() => void run(), options.restMs);
    },
    async flush() {
      await running;
      if (waiting) await run();
      return waiting || conflicted ? undefined : version;
    },
    stop() {
      stopped = true;
      clearTimeout(timer);
    },
  };
}
