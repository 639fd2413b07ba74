import type { Minor } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { type Db, rawRows, readMinor, type Trx } from '#server/platform/db';

/** Debits less credits of one account for one course, on everything posted so far. */
export async function courseBalance(trx: Trx | Db, courseId: number, account: string): Promise<Minor> {
  const [row] = await rawRows<{ total: unknown }>(
    trx,
    'SELECT SUM(amount_minor) AS total FROM journal_lines WHERE course_id = ? AND account_code = ?',
    [courseId, account],
  );
  return readMinor(row?.total);
}

/** Debits less credits of one account for one till. */
export async function tillBalance(trx: Trx | Db, tillId: number, account: string): Promise<Minor> {
  const [row] = await rawRows<{ total: unknown }>(
    trx,
    'SELECT SUM(amount_minor) AS total FROM journal_lines WHERE till_id = ? AND account_code = ?',
    [tillId, account],
  );
  return readMinor(row?.total);
}

/** One row of a trial balance: debits less credits up to and including a day. */
export interface AccountTotal {
  readonly account: string;
  readonly currency: string;
  readonly totalMinor: Minor;
}

/** The trial balance of the given sites as of a booked day; accounts without movement are absent. */
export async function accountTotals(
  trx: Trx | Db,
  siteIds: readonly number[],
  asOf: ClinicDate,
): Promise<AccountTotal[]> {
  if (siteIds.length === 0) return [];
  const rows = await rawRows<{ account_code: string; currency: string; total: unknown }>(
    trx,
    `SELECT account_code, currency, SUM(amount_minor) AS total FROM journal_lines
     WHERE booked_on <= ? AND site_id IN (${siteIds.map(() => '?').join(',')})
     GROUP BY account_code, currency ORDER BY account_code, currency`,
    [asOf, ...siteIds],
  );
  return rows.map((row) => ({
    account: row.account_code,
    currency: row.currency,
    totalMinor: readMinor(row.total),
  }));
}
