import { ACCOUNT } from '#domain/ledger/index';
import { minor } from '#domain/money/index';
import { rawRows, readMinor } from '#server/platform/db';
import type { ProofControl } from '../control.ts';

/** What surgeons are owed, less what they owe back. */
const feesPayable: ProofControl = {
  id: 'fees-payable',
  title: 'Surgeon fees payable',
  leftWords: 'accounts 2100 less 1150, by surgeon',
  rightWords: 'fee lines not yet paid, by surgeon',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{ user_id: number; name: string; books: unknown; records: unknown }>(
      trx,
      `SELECT u.user_id, u.name, b.books, f.records FROM users u
       JOIN user_roles r ON r.user_id = u.user_id AND r.role = 'surgeon'
       LEFT JOIN (SELECT payee_id, SUM(amount_minor) AS books FROM journal_lines WHERE account_code IN (?, ?) AND booked_on <= ? GROUP BY payee_id) b
         ON b.payee_id = u.user_id
       LEFT JOIN (SELECT surgeon_user_id, SUM(amount_minor) AS records FROM fee_lines WHERE booked_on <= ? GROUP BY surgeon_user_id) f
         ON f.surgeon_user_id = u.user_id ORDER BY u.name`,
      [ACCOUNT.surgeonFeesPayable, ACCOUNT.surgeonReceivable, asOf, asOf],
    );
    return rows.map((row) => ({
      label: row.name,
      leftMinor: minor(-readMinor(row.books)),
      rightMinor: readMinor(row.records),
      link: `/fees?surgeon=${row.user_id}`,
    }));
  },
};

/** Each till by the ledger and by its shifts. */
const tills: ProofControl = {
  id: 'tills',
  title: 'Each till',
  leftWords: 'account 1010 of the till',
  rightWords: 'its last closed shift’s float, or the open shift’s float and movements',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{
      till_id: number;
      name: string;
      site: string;
      books: unknown;
      records: unknown;
    }>(
      trx,
      `SELECT t.till_id, t.name, s.name AS site,
              (SELECT SUM(l.amount_minor) FROM journal_lines l WHERE l.till_id = t.till_id AND l.account_code = ? AND l.booked_on <= ?) AS books,
              (SELECT IF(x.state = 'closed', x.next_float_minor,
                 x.float_minor
                 + COALESCE((SELECT SUM(p.amount_minor) FROM receipt_tenders p JOIN receipts r ON r.receipt_id = p.receipt_id
                     LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
                     WHERE r.till_session_id = x.till_session_id AND p.tender = 'cash' AND v.receipt_id IS NULL AND r.booked_on <= ?), 0)
                 - COALESCE((SELECT SUM(r.change_minor) FROM receipts r LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
                     WHERE r.till_session_id = x.till_session_id AND v.receipt_id IS NULL AND r.booked_on <= ?), 0)
                 - COALESCE((SELECT SUM(m.amount_minor) FROM till_movements m WHERE m.till_session_id = x.till_session_id), 0))
               FROM till_sessions x WHERE x.till_id = t.till_id AND x.day_on <= ? ORDER BY x.till_session_id DESC LIMIT 1) AS records
       FROM tills t JOIN sites s ON s.site_id = t.site_id ORDER BY t.till_id`,
      [ACCOUNT.till, asOf, asOf, asOf, asOf],
    );
    return rows.map((row) => ({
      label: `${row.name}, ${row.site}`,
      leftMinor: readMinor(row.books),
      rightMinor: readMinor(row.records),
      link: '/takings',
    }));
  },
};

export const FEE_CONTROLS: readonly ProofControl[] = [tills, feesPayable];
