import { type ClinicDate, dayOf } from '#domain/time/index';
import { type Db, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';

/** The zone of a site, IANA name. */
export async function zoneOf(trx: Trx | Db, siteId: number): Promise<string> {
  const row = await trx<{ site_id: number; zone: string }>('sites').where({ site_id: siteId }).first('zone');
  if (!row) throw notFound('site');
  return row.zone;
}

/** Today on the wall of a site. */
export async function todayAt(trx: Trx | Db, deps: Pick<Deps, 'clock'>, siteId: number): Promise<ClinicDate> {
  return dayOf(deps.clock.now(), await zoneOf(trx, siteId));
}

/**
 * The day a posting of now belongs to at a site, its row share-locked until commit, so that the day cannot close under
 * the posting (invariant 3). It is today, or, once today is closed, the next day; the day opens by itself.
 */
export async function lockOpenDay(trx: Trx, deps: Pick<Deps, 'clock'>, siteId: number): Promise<ClinicDate> {
  const today = await todayAt(trx, deps, siteId);
  for (;;) {
    const [open] = await rawRows<{ day_on: ClinicDate }>(
      trx,
      `SELECT day_on FROM business_days WHERE site_id = ? AND day_on >= ? AND state <> 'closed'
       ORDER BY day_on LIMIT 1 LOCK IN SHARE MODE`,
      [siteId, today],
    );
    if (open) return open.day_on;
    await trx.raw(
      `INSERT IGNORE INTO business_days (site_id, day_on, state, opened_at)
       SELECT ?, GREATEST(?, COALESCE(MAX(day_on) + INTERVAL 1 DAY, ?)), 'open', ? FROM business_days
       WHERE site_id = ? AND day_on >= ?`,
      [siteId, today, today, sqlInstant(deps.clock.now()), siteId, today],
    );
  }
}

/** Locks a day exclusively: what closing does before it decides. Undefined when the day never opened. */
export async function lockDayForClosing(
  trx: Trx,
  siteId: number,
  day: ClinicDate,
): Promise<{ state: 'open' | 'counted' | 'closed' } | undefined> {
  const [row] = await rawRows<{ state: 'open' | 'counted' | 'closed' }>(
    trx,
    'SELECT state FROM business_days WHERE site_id = ? AND day_on = ? FOR UPDATE',
    [siteId, day],
  );
  return row;
}
