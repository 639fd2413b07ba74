import { rawRows, type Trx } from '#server/platform/db';

/** Where cash goes: a till that is open. Closing a till waits for payments under way, for they share-lock its session. */
export interface OpenTill {
  readonly tillId: number;
  readonly tillSessionId: number;
}

/** The open till of the person, else the only one open at the site; undefined when it is not plain which. */
export async function openTillFor(trx: Trx, siteId: number, userId: number): Promise<OpenTill | undefined> {
  const rows = await rawRows<{ till_session_id: number; till_id: number; opened_by: number }>(
    trx,
    `SELECT till_session_id, till_id, opened_by FROM till_sessions
     WHERE site_id = ? AND state = 'open' ORDER BY till_session_id LOCK IN SHARE MODE`,
    [siteId],
  );
  const row =
    rows.find((candidate) => candidate.opened_by === userId) ?? (rows.length === 1 ? rows[0] : undefined);
  return row ? { tillId: row.till_id, tillSessionId: row.till_session_id } : undefined;
}
