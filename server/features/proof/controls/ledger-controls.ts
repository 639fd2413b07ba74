import { rawRows, readMinor } from '#server/platform/db';
import type { ProofControl } from '../control.ts';

/** Debits equal credits, over everything. */
const trialBalance: ProofControl = {
  id: 'trial-balance',
  title: 'Trial balance',
  leftWords: 'all debits of the journal',
  rightWords: 'all credits of the journal',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{ currency: string; debit: unknown; credit: unknown }>(
      trx,
      `SELECT currency, SUM(GREATEST(amount_minor, 0)) AS debit, SUM(GREATEST(-amount_minor, 0)) AS credit
       FROM journal_lines WHERE booked_on <= ? GROUP BY currency`,
      [asOf],
    );
    return rows.map((row) => ({
      label: row.currency,
      leftMinor: readMinor(row.debit),
      rightMinor: readMinor(row.credit),
      link: '/proof/trial-balance',
    }));
  },
};

/** Each entry balances by itself and its lines agree with it in day, site and currency. */
const soundEntries: ProofControl = {
  id: 'entries',
  title: 'Every entry balances',
  leftWords: 'each entry’s lines',
  rightWords: 'zero, and the day, site and currency of the entry',
  kind: 'findings',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{ journal_entry_id: number; total: unknown; strays: unknown; lines: number }>(
      trx,
      `SELECT e.journal_entry_id, SUM(l.amount_minor) AS total, COUNT(l.journal_line_id) AS \`lines\`,
              SUM(l.booked_on <> e.booked_on OR l.site_id <> e.site_id OR l.currency <> e.currency) AS strays
       FROM journal_entries e LEFT JOIN journal_lines l ON l.journal_entry_id = e.journal_entry_id
       WHERE e.booked_on <= ? GROUP BY e.journal_entry_id HAVING total <> 0 OR total IS NULL OR strays > 0 OR \`lines\` < 2`,
      [asOf],
    );
    const [count] = await rawRows<{ n: number }>(
      trx,
      'SELECT COUNT(*) AS n FROM journal_entries WHERE booked_on <= ?',
      [asOf],
    );
    return {
      checked: count?.n ?? 0,
      findings: rows.map((row) => ({
        label: `Entry ${row.journal_entry_id}`,
        finding:
          row.lines < 2
            ? 'has fewer than two lines'
            : readMinor(row.total) === 0
              ? 'has a line of another day, site or currency'
              : 'does not balance',
        link: `/proof/journal?before=${row.journal_entry_id + 1}`,
      })),
    };
  },
};

/** Nothing was booked on a day after it was closed. */
const closedDays: ProofControl = {
  id: 'closed-days',
  title: 'Closed days stay closed',
  leftWords: 'when each entry was recorded',
  rightWords: 'when its day was closed',
  kind: 'findings',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{ journal_entry_id: number }>(
      trx,
      `SELECT e.journal_entry_id FROM journal_entries e
       JOIN business_days d ON d.site_id = e.site_id AND d.day_on = e.booked_on
       WHERE e.booked_on <= ? AND d.state = 'closed' AND e.recorded_at > d.closed_at`,
      [asOf],
    );
    const [count] = await rawRows<{ n: number }>(
      trx,
      "SELECT COUNT(*) AS n FROM business_days WHERE state = 'closed' AND day_on <= ?",
      [asOf],
    );
    return {
      checked: count?.n ?? 0,
      findings: rows.map((row) => ({
        label: `Entry ${row.journal_entry_id}`,
        finding: 'was recorded after its day was closed',
        link: `/proof/journal?before=${row.journal_entry_id + 1}`,
      })),
    };
  },
};

/** Receipts are numbered 1, 2, 3 … per site and year. */
const receiptSeries: ProofControl = {
  id: 'receipt-series',
  title: 'Receipt numbers without gaps',
  leftWords: 'numbers on receipts',
  rightWords: 'the counter of the series',
  kind: 'findings',
  async compute(trx) {
    const rows = await rawRows<{
      code: string;
      series_year: number;
      last_no: number;
      held: number;
      highest: number | null;
    }>(
      trx,
      `SELECT s.code, n.series_year, n.last_no, COUNT(r.receipt_id) AS held, MAX(r.series_no) AS highest
       FROM number_series n JOIN sites s ON s.site_id = n.site_id
       LEFT JOIN receipts r ON r.site_id = n.site_id AND r.series_year = n.series_year
       WHERE n.kind = 'receipt' GROUP BY n.site_id, n.series_year, n.last_no, s.code`,
    );
    return {
      checked: rows.reduce((total, row) => total + row.held, 0),
      findings: rows
        .filter((row) => row.held !== row.last_no || (row.highest ?? 0) !== row.last_no)
        .map((row) => ({
          label: `${row.code}-${String(row.series_year).slice(2)}`,
          finding: `${row.held} receipts, the highest ${row.highest ?? 0}, the counter at ${row.last_no}`,
        })),
    };
  },
};

export const LEDGER_CONTROLS: readonly ProofControl[] = [
  trialBalance,
  soundEntries,
  closedDays,
  receiptSeries,
];
