import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useRef } from 'react';

/** A hint that something changed at a site. */
export interface LiveHint {
  readonly siteId: number;
  readonly topic: string;
  readonly subjectId: number | null;
  readonly message: string | null;
}

/**
 * Fetches anew whatever is on the screen when the server hints at a change; `onHint` may tell people about it.
 * Nothing relies on hints: without them a page is merely as old as its last look.
 */
export function useLive(onHint?: (hint: LiveHint) => void): void {
  const client = useQueryClient();
  const listener = useRef(onHint);
  listener.current = onHint;
  useEffect(() => {
    const source = new EventSource('/api/live');
    source.onmessage = (event: MessageEvent<string>) => {
      const hint = JSON.parse(event.data) as LiveHint;
      client
        .invalidateQueries({ predicate: (query) => query.queryKey[0] !== 'session' })
        .catch(() => undefined);
      listener.current?.(hint);
    };
    return () => source.close();
  }, [client]);
}
