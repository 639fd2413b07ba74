import type { Derivation } from '#domain/derivation';
import { type CurrencyCode, currencyCode, type Minor } from '#domain/money/index';
import { shouldHold, type TillState } from '#domain/tills/index';
import { type ClinicDate, formatTime, type Instant } from '#domain/time/index';
import { zoneOf } from '#server/features/business-days/index';
import { type Db, rawRows, readMinor, type Trx } from '#server/platform/db';

/** One shift of a till. */
export interface TillSessionRow {
  readonly tillSessionId: number;
  readonly tillId: number;
  readonly tillName: string;
  readonly siteId: number;
  readonly dayOn: ClinicDate;
  readonly state: TillState;
  readonly floatMinor: Minor;
  readonly openedBy: string;
  readonly openedAt: Instant;
  readonly countedMinor: Minor | null;
  readonly shouldHoldMinor: Minor | null;
  readonly countedById: number | null;
  readonly countedBy: string | null;
  readonly differenceReason: string | null;
  readonly closedBy: string | null;
}

const SELECT = `
  SELECT x.till_session_id, x.till_id, t.name AS till_name, x.site_id, x.day_on, x.state, x.float_minor, o.name AS opened_by, x.opened_at,
         x.counted_minor, x.should_hold_minor, x.counted_by AS counted_by_id, k.name AS counted_by, x.difference_reason, z.name AS closed_by
  FROM till_sessions x JOIN tills t ON t.till_id = x.till_id JOIN users o ON o.user_id = x.opened_by
  LEFT JOIN users k ON k.user_id = x.counted_by LEFT JOIN users z ON z.user_id = x.closed_by`;

async function sessionsWhere(
  trx: Db | Trx,
  where: string,
  bindings: readonly unknown[],
): Promise<TillSessionRow[]> {
  const rows = await rawRows<{
    till_session_id: number;
    till_id: number;
    till_name: string;
    site_id: number;
    day_on: ClinicDate;
    state: TillState;
    float_minor: number;
    opened_by: string;
    opened_at: Instant;
    counted_minor: number | null;
    should_hold_minor: number | null;
    counted_by_id: number | null;
    counted_by: string | null;
    difference_reason: string | null;
    closed_by: string | null;
  }>(trx, `${SELECT} WHERE ${where}`, bindings);
  return rows.map((row) => ({
    tillSessionId: row.till_session_id,
    tillId: row.till_id,
    tillName: row.till_name,
    siteId: row.site_id,
    dayOn: row.day_on,
    state: row.state,
    floatMinor: readMinor(row.float_minor),
    openedBy: row.opened_by,
    openedAt: row.opened_at,
    countedMinor: row.counted_minor === null ? null : readMinor(row.counted_minor),
    shouldHoldMinor: row.should_hold_minor === null ? null : readMinor(row.should_hold_minor),
    countedById: row.counted_by_id,
    countedBy: row.counted_by,
    differenceReason: row.difference_reason,
    closedBy: row.closed_by,
  }));
}

/** A shift by its key. */
export async function tillSessionOf(
  trx: Db | Trx,
  tillSessionId: number,
): Promise<TillSessionRow | undefined> {
  return (await sessionsWhere(trx, 'x.till_session_id = ?', [tillSessionId]))[0];
}

/** A shift locked until the end of the transaction: payments under way share-lock it, so counting waits for them. */
export async function lockTillSession(trx: Trx, tillSessionId: number): Promise<TillSessionRow | undefined> {
  await rawRows(trx, 'SELECT till_session_id FROM till_sessions WHERE till_session_id = ? FOR UPDATE', [
    tillSessionId,
  ]);
  return await tillSessionOf(trx, tillSessionId);
}

/** Shifts of a site's day, in the order they were opened. */
export async function tillSessionsOfDay(
  trx: Db | Trx,
  siteId: number,
  day: ClinicDate,
): Promise<TillSessionRow[]> {
  return await sessionsWhere(trx, 'x.site_id = ? AND x.day_on = ? ORDER BY x.till_session_id', [siteId, day]);
}

/** The tills a site has. */
export async function tillsOf(trx: Db | Trx, siteId: number): Promise<{ tillId: number; name: string }[]> {
  const rows = await rawRows<{ till_id: number; name: string }>(
    trx,
    'SELECT till_id, name FROM tills WHERE site_id = ? ORDER BY name',
    [siteId],
  );
  return rows.map((row) => ({ tillId: row.till_id, name: row.name }));
}

/** Drops and what was paid out in a shift, oldest first. */
export async function tillMovementsOf(trx: Db | Trx, tillSessionId: number) {
  const rows = await rawRows<{
    kind: 'drop' | 'paid_out';
    amount_minor: number;
    reason: string;
    recorded_at: Instant;
    name: string;
  }>(
    trx,
    `SELECT m.kind, m.amount_minor, m.reason, m.recorded_at, u.name FROM till_movements m JOIN users u ON u.user_id = m.user_id
     WHERE m.till_session_id = ? ORDER BY m.till_movement_id`,
    [tillSessionId],
  );
  return rows.map((row) => ({
    kind: row.kind,
    amountMinor: readMinor(row.amount_minor),
    reason: row.reason,
    at: row.recorded_at,
    by: row.name,
  }));
}

/** What a shift's till should hold by its own records, with the reasons. The ledger says the same by another way. */
export async function expectedCash(
  trx: Db | Trx,
  session: TillSessionRow,
): Promise<{ amountMinor: Minor; why: Derivation }> {
  const [cash] = await rawRows<{ n: number; cash: unknown; change_given: unknown }>(
    trx,
    `SELECT COUNT(*) AS n, SUM(x.cash) AS cash, SUM(x.change_minor) AS change_given FROM (
       SELECT r.receipt_id, r.change_minor, SUM(t.amount_minor) AS cash FROM receipts r
       JOIN receipt_tenders t ON t.receipt_id = r.receipt_id AND t.tender = 'cash'
       LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
       WHERE r.till_session_id = ? AND v.receipt_id IS NULL GROUP BY r.receipt_id, r.change_minor) x`,
    [session.tillSessionId],
  );
  const zone = await zoneOf(trx, session.siteId);
  const moves = await tillMovementsOf(trx, session.tillSessionId);
  return shouldHold({
    floatMinor: session.floatMinor,
    openedAt: formatTime(session.openedAt, zone),
    receipts: {
      count: cash?.n ?? 0,
      cashMinor: readMinor(cash?.cash),
      changeMinor: readMinor(cash?.change_given),
    },
    refunds: { count: 0, amountMinor: readMinor(0) },
    moves: moves.map((move) => ({
      kind: move.kind,
      amountMinor: move.amountMinor,
      words: `${move.reason}, ${formatTime(move.at, zone)}`,
    })),
  });
}

/** The clinic's currency, in which tills are counted. */
export async function currencyOf(trx: Db | Trx): Promise<CurrencyCode> {
  const [clinic] = await rawRows<{ currency: string }>(
    trx,
    'SELECT currency FROM clinics ORDER BY clinic_id LIMIT 1',
  );
  return currencyCode(clinic?.currency ?? 'EUR');
}
