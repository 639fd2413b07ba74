import { type QueryClient, useQueryClient } from '@tanstack/react-query';
import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import { call } from '#client/api/call.ts';
import { ProblemError } from '#client/api/problem-error.ts';
import { type QuoteView, saveDraft } from '#contract/quotes';
import type { QuoteDraft } from '#domain/quotes/index';
import type { Instant } from '#domain/time/index';
import { type Autosave, createAutosave, type SaveState } from './autosave.ts';
import { quoteQuery } from './queries.ts';

const REST_MS = 600;

type WireDraft = NonNullable<QuoteView['draft']>;

export interface DraftDesk {
  readonly draft: QuoteDraft;
  /** Version of the draft as it was saved last. */
  readonly version: number;
  readonly state: SaveState;
  readonly savedAt: Instant;
  /** Why the last save failed. */
  readonly problem: ProblemError | undefined;
  change(next: QuoteDraft): void;
  /** Saves what is not saved yet; the version to go on from, or undefined when it could not be saved. */
  flush(): Promise<number | undefined>;
  /** After a conflict: the newer draft from the server, in place of one's own. */
  takeTheirs(): Promise<void>;
  /** After a conflict: one's own draft over the newer one, because a person said so. */
  keepMine(): Promise<void>;
}

/** A draft being written: on the screen at once, on the server a moment later. */
export function useDraft(quote: QuoteView, initial: QuoteDraft): DraftDesk {
  const client = useQueryClient();
  const [draft, setDraft] = useState(initial);
  const [state, setState] = useState<SaveState>('saved');
  const [savedAt, setSavedAt] = useState<Instant>(quote.changedAt);
  const [problem, setProblem] = useState<ProblemError>();
  const [generation, setGeneration] = useState(0);
  const version = useRef(quote.draftVersion);
  const [shownVersion, setShownVersion] = useState(quote.draftVersion);
  const autosave = useRef<Autosave<QuoteDraft>>(undefined);
  const mine = useRef(draft);
  mine.current = draft;
  const overwrite = useRef(false);
  const { quoteId } = quote;

  // biome-ignore lint/correctness/useExhaustiveDependencies: a new generation begins anew on the version just read
  useEffect(() => {
    const saving = createAutosave<QuoteDraft>({
      version: version.current,
      restMs: REST_MS,
      save: async (next, from) => {
        const saved = await saveAndShare(client, quoteId, next, from);
        version.current = saved.draftVersion;
        setShownVersion(saved.draftVersion);
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
    if (overwrite.current) {
      overwrite.current = false;
      saving.change(mine.current);
    }
    return () => {
      void saving.flush().finally(() => saving.stop());
    };
  }, [client, quoteId, generation]);

  const change = useCallback((next: QuoteDraft) => {
    setDraft(next);
    autosave.current?.change(next);
  }, []);

  const flush = useCallback(async () => await autosave.current?.flush(), []);

  const beginAnew = useCallback(async () => {
    const newer = await client.fetchQuery({ ...quoteQuery(quoteId), staleTime: 0 });
    version.current = newer.draftVersion;
    setShownVersion(newer.draftVersion);
    setSavedAt(newer.changedAt);
    setProblem(undefined);
    setGeneration((before) => before + 1);
    return newer;
  }, [client, quoteId]);

  const takeTheirs = useCallback(async () => {
    const newer = await beginAnew();
    if (newer.draft) setDraft(newer.draft);
    setState('saved');
  }, [beginAnew]);

  const keepMine = useCallback(async () => {
    overwrite.current = true;
    await beginAnew();
  }, [beginAnew]);

  useWarnBeforeLeaving(state !== 'saved');
  return useMemo(
    () => ({ draft, version: shownVersion, state, savedAt, problem, change, flush, takeTheirs, keepMine }),
    [draft, shownVersion, state, savedAt, problem, change, flush, takeTheirs, keepMine],
  );
}

/** Saves a draft; what other pages read of this quote is then the draft just saved, not the one first fetched. */
async function saveAndShare(client: QueryClient, quoteId: number, draft: QuoteDraft, draftVersion: number) {
  const body = { draft: draft as WireDraft, draftVersion };
  const saved = await call(saveDraft, { params: { quoteId }, body });
  client.setQueryData(quoteQuery(quoteId).queryKey, (before) =>
    before
      ? {
          ...before,
          draft: body.draft,
          draftVersion: saved.draftVersion,
          changedAt: saved.savedAt,
          prices: saved.prices,
          draftDiffers: true,
        }
      : before,
  );
  return saved;
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
