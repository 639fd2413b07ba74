import { addMs, instantOfMs, msOf } from '#domain/time/index';
import type { Clock } from './clock.ts';
import { type Db, rawRows, sqlInstant } from './db.ts';

/** So many tries in so long, counted in the database so that every process counts together. */
export interface RateRule {
  readonly name: string;
  readonly limit: number;
  readonly windowMs: number;
}

export interface RateAnswer {
  readonly allowed: boolean;
  readonly hits: number;
  /** Whole seconds until the window ends. */
  readonly retryAfter: number;
}

/** Counts one try under a rule and key, atomically across processes. */
export async function countTry(db: Db, clock: Clock, rule: RateRule, key: string): Promise<RateAnswer> {
  const now = clock.now();
  const start = instantOfMs(Math.floor(msOf(now) / rule.windowMs) * rule.windowMs);
  const end = addMs(start, rule.windowMs);
  const [row] = await rawRows<{ hits: number }>(
    db,
    `INSERT INTO rate_counters (counter_key, window_start, hits, expires_at) VALUES (?, ?, 1, ?)
     ON DUPLICATE KEY UPDATE hits = hits + 1 RETURNING hits`,
    [`${rule.name}:${key}`.slice(0, 120), sqlInstant(start), sqlInstant(end)],
  );
  const hits = row?.hits ?? 1;
  return {
    allowed: hits <= rule.limit,
    hits,
    retryAfter: Math.max(1, Math.ceil((msOf(end) - msOf(now)) / 1000)),
  };
}

/** Tries counted so far in the running window, without adding one. */
export async function triesSoFar(db: Db, clock: Clock, rule: RateRule, key: string): Promise<RateAnswer> {
  const now = clock.now();
  const start = instantOfMs(Math.floor(msOf(now) / rule.windowMs) * rule.windowMs);
  const [row] = await rawRows<{ hits: number }>(
    db,
    'SELECT hits FROM rate_counters WHERE counter_key = ? AND window_start = ?',
    [`${rule.name}:${key}`.slice(0, 120), sqlInstant(start)],
  );
  const hits = row?.hits ?? 0;
  return {
    allowed: hits < rule.limit,
    hits,
    retryAfter: Math.max(1, Math.ceil((msOf(start) + rule.windowMs - msOf(now)) / 1000)),
  };
}

/** Forgets a key's count: after a sign-in that was right. */
export async function forgetTries(db: Db, rule: RateRule, key: string): Promise<void> {
  await db('rate_counters')
    .where({ counter_key: `${rule.name}:${key}`.slice(0, 120) })
    .delete();
}

/** Clears windows that are over. */
export async function pruneCounters(db: Db, clock: Clock): Promise<number> {
  return await db('rate_counters').where('expires_at', '<', sqlInstant(clock.now())).delete();
}
