import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { SYSTEM } from '#server/platform/actor';
import { rawRows, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { inTransaction } from '#server/platform/transaction';

const BATCH = 200;

/**
 * Writes down which issued quotes have lapsed by their date; returns how many. Nothing depends on when it runs: every read and
 * every acceptance looks at the date itself.
 */
export async function lapseQuotes(deps: Deps): Promise<number> {
  const sites = await rawRows<{ site_id: number }>(deps.db, 'SELECT site_id FROM sites ORDER BY site_id');
  let lapsed = 0;
  for (const { site_id: siteId } of sites) lapsed += await lapseAt(deps, siteId);
  return lapsed;
}

async function lapseAt(deps: Deps, siteId: number): Promise<number> {
  return await inTransaction(deps.db, async (trx) => {
    const today = await todayAt(trx, deps, siteId);
    const rows = await rawRows<{ quote_id: number }>(
      trx,
      `SELECT q.quote_id FROM quotes q
       WHERE q.site_id = ? AND q.state = 'issued'
         AND (SELECT MAX(v.valid_until) FROM quote_versions v WHERE v.quote_id = q.quote_id
              AND v.version_no = (SELECT MAX(n.version_no) FROM quote_versions n WHERE n.quote_id = q.quote_id)) < ?
       ORDER BY q.quote_id LIMIT ${BATCH} FOR UPDATE SKIP LOCKED`,
      [siteId, today],
    );
    for (const { quote_id: quoteId } of rows) {
      await trx('quotes')
        .where({ quote_id: quoteId })
        .update({ state: 'lapsed', changed_at: sqlInstant(deps.clock.now()) });
      await recordAudit(trx, deps, {
        actor: SYSTEM,
        action: 'quote.lapsed',
        subjectType: 'quote',
        subjectId: quoteId,
        siteId,
      });
    }
    return rows.length;
  });
}
