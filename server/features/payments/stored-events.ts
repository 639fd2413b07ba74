import { addMs, type Instant } from '#domain/time/index';
import type { ProcessorEvent } from '#server/gateways/index';
import { type Db, rawRows, sqlInstant } from '#server/platform/db';
import { inTransaction } from '#server/platform/transaction';

/** Stores an event once, whatever the order and number of its deliveries. True when it was new. */
export async function storeEvent(db: Db, event: ProcessorEvent, receivedAt: Instant): Promise<boolean> {
  return await inTransaction(db, async (trx) => {
    const [result] = (await trx.raw(
      `INSERT IGNORE INTO stripe_events (stripe_event_id, type, object_id, payload, received_at, state, next_try_at)
       VALUES (?, ?, ?, ?, ?, 'waiting', ?)`,
      [
        event.id,
        event.type,
        event.objectId,
        JSON.stringify(event),
        sqlInstant(receivedAt),
        sqlInstant(receivedAt),
      ],
    )) as [{ affectedRows: number }];
    return result.affectedRows === 1;
  });
}

export interface ClaimedEvent {
  readonly id: string;
  readonly type: string;
  readonly objectId: string;
  readonly tries: number;
}

const LEASE_MS = 60_000;

/** Claims waiting events for this worker; a claim that is never finished is taken up again after the lease. */
export async function claimEvents(db: Db, now: Instant, limit: number): Promise<ClaimedEvent[]> {
  return await inTransaction(db, async (trx) => {
    const rows = await rawRows<{ stripe_event_id: string; type: string; object_id: string; tries: number }>(
      trx,
      `SELECT stripe_event_id, type, object_id, tries + 1 AS tries FROM stripe_events
       WHERE state = 'waiting' AND next_try_at <= ? ORDER BY received_at, stripe_event_id LIMIT ? FOR UPDATE SKIP LOCKED`,
      [sqlInstant(now), limit],
    );
    if (rows.length > 0) {
      await trx('stripe_events')
        .whereIn(
          'stripe_event_id',
          rows.map((row) => row.stripe_event_id),
        )
        .update({ tries: trx.raw('tries + 1'), next_try_at: sqlInstant(addMs(now, LEASE_MS)) });
    }
    return rows.map((row) => ({
      id: row.stripe_event_id,
      type: row.type,
      objectId: row.object_id,
      tries: row.tries,
    }));
  });
}

/** What became of an event: acted on, or kept because nothing of ours matches it. */
export async function finishEvent(
  db: Db,
  id: string,
  state: 'handled' | 'parked',
  now: Instant,
): Promise<void> {
  await inTransaction(db, (trx) =>
    trx('stripe_events')
      .where({ stripe_event_id: id })
      .update({ state, handled_at: sqlInstant(now), last_error: null }),
  );
}

/** Puts an event back for later, with the reason. */
export async function retryEvent(db: Db, id: string, reason: string, at: Instant): Promise<void> {
  await inTransaction(db, (trx) =>
    trx('stripe_events')
      .where({ stripe_event_id: id })
      .update({ next_try_at: sqlInstant(at), last_error: reason.slice(0, 200) }),
  );
}
