import type { Db, Trx } from './db.ts';
import { isRetryable } from './db-errors.ts';

const TRIES = 5;

/**
 * Runs `work` in one READ COMMITTED transaction and commits. A deadlock or lock wait rolls all back and tries again,
 * so `work` must do nothing outside the transaction (no network call, no mail: invariant 19).
 */
export async function inTransaction<T>(db: Db, work: (trx: Trx) => Promise<T>): Promise<T> {
  for (let attempt = 1; ; attempt += 1) {
    try {
      return await db.transaction(work, { isolationLevel: 'read committed' });
    } catch (error) {
      if (attempt >= TRIES || !isRetryable(error)) throw error;
      await new Promise((resolve) => setTimeout(resolve, 10 * attempt * (1 + Math.random())));
    }
  }
}

/** Reads in one consistent snapshot: what Proof and closing need, for several statements must see the same rows. */
export async function inSnapshot<T>(db: Db, work: (trx: Trx) => Promise<T>): Promise<T> {
  return await db.transaction(work, { isolationLevel: 'repeatable read' });
}
