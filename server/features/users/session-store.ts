import { createHash } from 'node:crypto';
import session from 'express-session';
import { addMs, type Instant } from '#domain/time/index';
import type { Clock } from '#server/platform/clock';
import { type Db, rawRows, sqlInstant } from '#server/platform/db';

/** How long a session lives without being used. */
export const SESSION_MS = 12 * 60 * 60 * 1000;
/** A session's end is moved at most this often: reading a page must not write each time. */
const TOUCH_EVERY_MS = 5 * 60 * 1000;

/**
 * Sessions in MariaDB under the digest of their id, so that the table gives nobody a session. A database that is away makes
 * a request fail, never the process.
 */
export class SessionStore extends session.Store {
  readonly #db: Db;
  readonly #clock: Clock;

  constructor(db: Db, clock: Clock) {
    super();
    this.#db = db;
    this.#clock = clock;
  }

  override get(sid: string, done: (error: unknown, data?: session.SessionData | null) => void): void {
    this.#read(sid).then((data) => done(null, data), done);
  }

  override set(sid: string, data: session.SessionData, done?: (error?: unknown) => void): void {
    const row = { sid_hash: digest(sid), data: JSON.stringify(data), expires_at: sqlInstant(this.#end()) };
    this.#db('sessions')
      .insert(row)
      .onConflict('sid_hash')
      .merge()
      .then(() => done?.(), done);
  }

  override destroy(sid: string, done?: (error?: unknown) => void): void {
    this.#db('sessions')
      .where({ sid_hash: digest(sid) })
      .delete()
      .then(() => done?.(), done);
  }

  override touch(sid: string, _data: session.SessionData, done?: () => void): void {
    const late = sqlInstant(addMs(this.#end(), -TOUCH_EVERY_MS));
    this.#db('sessions')
      .where({ sid_hash: digest(sid) })
      .andWhere('expires_at', '<', late)
      .update({ expires_at: sqlInstant(this.#end()) })
      .then(
        () => done?.(),
        () => done?.(),
      );
  }

  async #read(sid: string): Promise<session.SessionData | null> {
    const [row] = await rawRows<{ data: string; expires_at: Instant }>(
      this.#db,
      'SELECT data, expires_at FROM sessions WHERE sid_hash = ?',
      [digest(sid)],
    );
    if (!row || row.expires_at <= this.#clock.now()) return null;
    return (typeof row.data === 'string' ? JSON.parse(row.data) : row.data) as session.SessionData;
  }

  #end(): Instant {
    return addMs(this.#clock.now(), SESSION_MS);
  }
}

function digest(sid: string): Buffer {
  return createHash('sha256').update(sid).digest();
}

/** Clears sessions that are over. */
export async function pruneSessions(db: Db, clock: Clock): Promise<number> {
  return await db('sessions').where('expires_at', '<', sqlInstant(clock.now())).delete();
}
