import { createContext, type ReactNode, useCallback, useContext, useMemo, useState } from 'react';

interface Announcer {
  announce(words: string): void;
}

const AnnouncerContext = createContext<Announcer>({ announce: () => undefined });

const SHOWN_MS = 6_000;

/** One polite voice for the page: what changed by itself, or what was just done. Shown a while, and read out. */
export function AnnouncerProvider({ children }: { readonly children: ReactNode }) {
  const [said, setSaid] = useState<{ readonly words: string; readonly at: number } | null>(null);
  const announce = useCallback((words: string) => {
    const at = performance.now();
    setSaid({ words, at });
    setTimeout(() => setSaid((now) => (now?.at === at ? null : now)), SHOWN_MS);
  }, []);
  const value = useMemo(() => ({ announce }), [announce]);
  return (
    <AnnouncerContext.Provider value={value}>
      {children}
      <div
        role="status"
        aria-live="polite"
        className="pointer-events-none fixed inset-x-0 bottom-4 z-40 flex justify-center px-4"
      >
        {said ? <p className="border-2 border-ink bg-sheet px-4 py-2 font-semibold">{said.words}</p> : null}
      </div>
    </AnnouncerContext.Provider>
  );
}

/** Says something to the person, politely. */
export function useAnnounce(): (words: string) => void {
  return useContext(AnnouncerContext).announce;
}
