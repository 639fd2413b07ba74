import type { Clock } from './clock.ts';
import { sqlInstant, type Trx } from './db.ts';

/** "Something of this kind changed, fetch it again": nothing relies on a hint's content, order or arrival. */
export interface LiveHint {
  readonly siteId: number;
  readonly topic: string;
  readonly subjectId?: number;
  /** A sentence for the people at the site, announced politely. */
  readonly message?: string;
}

/** Leaves a hint in the caller's transaction; every process reads the table and tells its browsers. */
export async function hint(trx: Trx, clock: Clock, given: LiveHint): Promise<void> {
  await trx('live_hints').insert({
    site_id: given.siteId,
    topic: given.topic,
    subject_id: given.subjectId ?? null,
    message: given.message?.slice(0, 200) ?? null,
    created_at: sqlInstant(clock.now()),
  });
}
