import { useQueryClient } from '@tanstack/react-query';
import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import { call } from '#client/api/call.ts';
import { ProblemError } from '#client/api/problem-error.ts';
import { type OptionPrice, type QuoteView, saveDraft } from '#contract/quotes';
import type { QuoteDraft } from '#domain/quotes/index';
import type { Instant } from '#domain/time/index';
import { type Autosave, createAutosave, type SaveState } from './autosave.ts';
import { quoteQuery } from './queries.ts';

const REST_MS = 600;

type WireDraft = NonNullable<QuoteView['draft']>;

export interface DraftDesk {
  readonly draft: QuoteDraft;
  readonly state: SaveState;
  readonly savedAt: Instant;
  /** Why the last save failed. */
  readonly problem: ProblemError | undefined;
  /** What the server made of the draft when it was last saved. */
  readonly prices: readonly OptionPrice[];
  change(next: QuoteDraft): void;
  /** Saves what is not saved yet; the version to go on from, or undefined when it could not be saved. */
  flush(): Promise<{ draftVersion: number; prices: readonly OptionPrice[] } | undefined>;
  /** After a conflict: the newer draft from the server, in place of one's own. */
  takeTheirs(): Promise<void>;
}

/** A draft being written: on the screen at once, on the server a moment later. */
export function useDraft(quote: QuoteView, initial: QuoteDraft): DraftDesk {
  const client = useQueryClient();
  const [draft, setDraft] = useState(initial);
  const [state, setState] = useState<SaveState>('saved');
  const [savedAt, setSavedAt] = useState<Instant>(quote.changedAt);
  const [problem, setProblem] = useState<ProblemError>();
  const [generation, setGeneration] = useState(0);
  const prices = useRef<readonly OptionPrice[]>(quote.prices);
  const version = useRef(quote.draftVersion);
  const autosave = useRef<Autosave<QuoteDraft>>(undefined);
  const { quoteId } = quote;

  // biome-ignore lint/correctness/useExhaustiveDependencies: a new generation begins anew on the version just read
  useEffect(() => {
    const saving = createAutosave<QuoteDraft>({
      version: version.current,
      restMs: REST_MS,
      save: async (next, from) => {
        const body = { draft: next as WireDraft, draftVersion: from };
        const saved = await call(saveDraft, { params: { quoteId }, body });
        prices.current = saved.prices;
        version.current = saved.draftVersion;
        setSavedAt(saved.savedAt);
        return { version: saved.draftVersion };
      },
      isConflict: (error) => error instanceof ProblemError && error.code === 'conflict',
      onState: (next, error) => {
        setState(next);
        setProblem(error instanceof ProblemError ? error : undefined);
      },
    });
    autosave.current = saving;
    return () => {
      void saving.flush().finally(() => saving.stop());
    };
  }, [quoteId, generation]);

  const change = useCallback((next: QuoteDraft) => {
    setDraft(next);
    autosave.current?.change(next);
  }, []);

  const flush = useCallback(async () => {
    const draftVersion = await autosave.current?.flush();
    return draftVersion === undefined ? undefined : { draftVersion, prices: prices.current };
  }, []);

  const takeTheirs = useCallback(async () => {
    const newer = await client.fetchQuery({ ...quoteQuery(quoteId), staleTime: 0 });
    version.current = newer.draftVersion;
    prices.current = newer.prices;
    setSavedAt(newer.changedAt);
    setState('saved');
    setProblem(undefined);
    if (newer.draft) setDraft(newer.draft);
    setGeneration((before) => before + 1);
  }, [client, quoteId]);

  useWarnBeforeLeaving(state !== 'saved');
  return useMemo(
    () => ({ draft, state, savedAt, problem, prices: prices.current, change, flush, takeTheirs }),
    [draft, state, savedAt, problem, change, flush, takeTheirs],
  );
}

/** The browser asks before a page with unsaved work is closed. */
function useWarnBeforeLeaving(unsaved: boolean): void {
  useEffect(() => {
    if (!unsaved) return;
    const warn = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener('beforeunload', warn);
    return () => window.removeEventListener('beforeunload', warn);
  }, [unsaved]);
}
