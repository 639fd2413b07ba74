import type { Response } from 'express';
import type { StaffActor } from '#server/platform/actor';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';

const POLL_MS = 1_000;

/** Open streams of this process; stopping ends them so that the server can close. */
export class LiveStreams {
  readonly #open = new Set<() => void>();

  /** Keeps a browser told of hints at the person's sites until it goes, the session ends or the process stops. */
  follow(
    deps: Pick<Deps, 'db' | 'log'>,
    res: Response,
    actor: StaffActor,
    stillSignedIn: () => Promise<boolean>,
  ): void {
    res.status(200);
    res.setHeader('Content-Type', 'text/event-stream');
    res.setHeader('Cache-Control', 'no-store');
    res.setHeader('X-Accel-Buffering', 'no');
    res.write('retry: 3000\n\n');
    let last: number | undefined;
    let beats = 0;
    const timer = setInterval(() => {
      step().catch(() => undefined);
    }, POLL_MS);
    const end = (): void => {
      clearInterval(timer);
      this.#open.delete(end);
      res.end();
    };
    const step = async (): Promise<void> => {
      beats += 1;
      if (beats % 15 === 0) {
        if (!(await stillSignedIn())) return end();
        res.write(': still here\n\n');
      }
      last = await sendHints(deps, res, actor.siteIds, last);
    };
    this.#open.add(end);
    res.on('close', end);
  }

  /** Ends every stream. */
  stop(): void {
    for (const end of [...this.#open]) end();
  }
}

async function sendHints(
  deps: Pick<Deps, 'db'>,
  res: Response,
  siteIds: readonly number[],
  last: number | undefined,
): Promise<number> {
  if (last === undefined || siteIds.length === 0) {
    const [newest] = await rawRows<{ id: number | null }>(
      deps.db,
      'SELECT MAX(live_hint_id) AS id FROM live_hints',
    );
    return newest?.id ?? 0;
  }
  const rows = await rawRows<{
    live_hint_id: number;
    site_id: number;
    topic: string;
    subject_id: number | null;
    message: string | null;
  }>(
    deps.db,
    `SELECT live_hint_id, site_id, topic, subject_id, message FROM live_hints
     WHERE live_hint_id > ? AND site_id IN (${siteIds.map(() => '?').join(',')}) ORDER BY live_hint_id LIMIT 100`,
    [last, ...siteIds],
  );
  for (const row of rows) {
    res.write(
      `data: ${JSON.stringify({ siteId: row.site_id, topic: row.topic, subjectId: row.subject_id, message: row.message })}\n\n`,
    );
  }
  return rows.at(-1)?.live_hint_id ?? last;
}
