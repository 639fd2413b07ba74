import { rawRows, type Trx } from '#server/platform/db';

/** Series that must have no gaps; each counts from 1 per site and year. */
export type SeriesKind = 'receipt' | 'refund' | 'quote' | 'course';

/**
 * Takes the next number of a series. Call it LAST in the transaction: its row stays locked until the commit, which is
 * what makes the series gapless, and every other taker waits (invariant 4).
 */
export async function takeNumber(trx: Trx, siteId: number, year: number, kind: SeriesKind): Promise<number> {
  const [row] = await rawRows<{ last_no: number }>(
    trx,
    `INSERT INTO number_series (site_id, series_year, kind, last_no) VALUES (?, ?, ?, 1)
     ON DUPLICATE KEY UPDATE last_no = last_no + 1 RETURNING last_no`,
    [siteId, year, kind],
  );
  if (!row) throw new Error('The series gave no number');
  return row.last_no;
}
