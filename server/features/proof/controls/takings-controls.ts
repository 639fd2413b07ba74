import { ACCOUNT } from '#domain/ledger/index';
import { minor } from '#domain/money/index';
import { rawRows, readMinor } from '#server/platform/db';
import type { ProofControl } from '../control.ts';

/** A receipt's total is its tenders less change and rounding (invariant 5). */
const receipts: ProofControl = {
  id: 'receipts',
  title: 'Each receipt',
  leftWords: 'tenders less change and rounding',
  rightWords: 'total of the receipt',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{
      receipt_id: number;
      number: string;
      tendered: unknown;
      total_minor: unknown;
    }>(
      trx,
      `SELECT r.receipt_id, r.number, SUM(t.amount_minor) - r.change_minor + r.rounding_minor AS tendered, r.total_minor
       FROM receipts r LEFT JOIN receipt_tenders t ON t.receipt_id = r.receipt_id WHERE r.booked_on <= ?
       GROUP BY r.receipt_id, r.number, r.change_minor, r.rounding_minor, r.total_minor`,
      [asOf],
    );
    return rows.map((row) => ({
      label: `Receipt ${row.number}`,
      leftMinor: readMinor(row.tendered),
      rightMinor: readMinor(row.total_minor),
      link: `/takings/receipts/${row.receipt_id}`,
    }));
  },
};

/** Every receipt has one entry, and a void has its reversal (invariant 6). */
const receiptEntries: ProofControl = {
  id: 'receipt-entries',
  title: 'Every receipt is posted once',
  leftWords: 'receipts and voids',
  rightWords: 'their entries',
  kind: 'findings',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{ number: string; entries: number; voids: number; reversals: number }>(
      trx,
      `SELECT r.number, COUNT(DISTINCT e.journal_entry_id) AS entries, COUNT(DISTINCT v.receipt_id) AS voids,
              COUNT(DISTINCT x.journal_entry_id) AS reversals
       FROM receipts r
       LEFT JOIN journal_entries e ON e.source_type = 'receipt' AND e.source_id = r.receipt_id
       LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
       LEFT JOIN journal_entries x ON x.source_type = 'receipt_void' AND x.source_id = r.receipt_id
       WHERE r.booked_on <= ? GROUP BY r.receipt_id, r.number HAVING entries <> 1 OR voids <> reversals`,
      [asOf],
    );
    const [count] = await rawRows<{ n: number }>(
      trx,
      'SELECT COUNT(*) AS n FROM receipts WHERE booked_on <= ?',
      [asOf],
    );
    return {
      checked: count?.n ?? 0,
      findings: rows.map((row) => ({
        label: `Receipt ${row.number}`,
        finding: `${row.entries} entries, ${row.voids} voids, ${row.reversals} reversals`,
      })),
    };
  },
};

/** What the processor holds for us. */
const onlineClearing: ProofControl = {
  id: 'online-clearing',
  title: 'Online clearing',
  leftWords: 'account 1100',
  rightWords: 'the processor’s movements not yet paid out, and payments it has not told yet',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const [books] = await rawRows<{ total: unknown }>(
      trx,
      'SELECT SUM(amount_minor) AS total FROM journal_lines WHERE account_code = ? AND booked_on <= ?',
      [ACCOUNT.onlineClearing, asOf],
    );
    const [moved] = await rawRows<{ total: unknown }>(
      trx,
      `SELECT SUM(IF(b.receipt_id IS NOT NULL AND b.category = 'charge', b.amount_minor * (r.booked_on <= ?) - b.fee_minor * (b.booked_on <= ?),
                     b.net_minor * (b.booked_on <= ?))) AS total
       FROM balance_transactions b LEFT JOIN receipts r ON r.receipt_id = b.receipt_id WHERE b.category <> 'payout'`,
      [asOf, asOf, asOf],
    );
    const [untold] = await rawRows<{ total: unknown }>(
      trx,
      `SELECT SUM(t.amount_minor) AS total FROM receipt_tenders t JOIN receipts r ON r.receipt_id = t.receipt_id
       LEFT JOIN balance_transactions b ON b.source_external_id = t.charge_id AND b.category = 'charge'
       WHERE t.tender = 'online_card' AND r.booked_on <= ? AND b.balance_transaction_id IS NULL`,
      [asOf],
    );
    const [paidOut] = await rawRows<{ total: unknown }>(
      trx,
      'SELECT SUM(amount_minor) AS total FROM payouts WHERE tied_at IS NOT NULL AND booked_on <= ?',
      [asOf],
    );
    return [
      {
        label: 'Online clearing',
        leftMinor: readMinor(books?.total),
        rightMinor: minor(readMinor(moved?.total) + readMinor(untold?.total) - readMinor(paidOut?.total)),
        link: '/bank',
      },
    ];
  },
};

const TENDER_ACCOUNTS = [
  ['card_machine', ACCOUNT.terminalClearing],
  ['bank_transfer', ACCOUNT.transfersAwaited],
  ['cheque', ACCOUNT.chequesInHand],
  ['lender', ACCOUNT.lender],
] as const;

/** Tenders on their way to the bank: what was taken, as long as nothing of it has settled. */
const tendersTaken: ProofControl = {
  id: 'tenders',
  title: 'Card machine, transfers, cheques, lender',
  leftWords: 'accounts 1110, 1025, 1015 and 1120, as debited by receipts',
  rightWords: 'tenders on receipts that stand',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const rows = [];
    for (const [tender, account] of TENDER_ACCOUNTS) {
      const [books] = await rawRows<{ total: unknown }>(
        trx,
        `SELECT SUM(l.amount_minor) AS total FROM journal_lines l JOIN journal_entries e ON e.journal_entry_id = l.journal_entry_id
         WHERE l.account_code = ? AND l.booked_on <= ? AND e.source_type IN ('receipt', 'receipt_void')`,
        [account, asOf],
      );
      const [taken] = await rawRows<{ total: unknown }>(
        trx,
        `SELECT SUM(t.amount_minor) AS total FROM receipt_tenders t JOIN receipts r ON r.receipt_id = t.receipt_id
         LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id AND v.booked_on <= ?
         WHERE t.tender = ? AND r.booked_on <= ? AND v.receipt_id IS NULL`,
        [asOf, tender, asOf],
      );
      rows.push({
        label: `Account ${account}`,
        leftMinor: readMinor(books?.total),
        rightMinor: readMinor(taken?.total),
        link: `/proof/journal?account=${account}`,
      });
    }
    return rows;
  },
};

/** Payouts that reached the bank. */
const payouts: ProofControl = {
  id: 'payouts',
  title: 'Payouts',
  leftWords: 'account 1000, as debited by payouts',
  rightWords: 'payouts of the processor, each tied to its movements',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{
      payout_id: number;
      arrives_on: string;
      amount_minor: number;
      posted: unknown;
      moved: unknown;
    }>(
      trx,
      `SELECT p.payout_id, p.arrives_on, p.amount_minor,
              (SELECT SUM(l.amount_minor) FROM journal_entries e JOIN journal_lines l ON l.journal_entry_id = e.journal_entry_id
               WHERE e.source_type = 'payout' AND e.source_id = p.payout_id AND l.account_code = ?) AS posted,
              (SELECT SUM(b.net_minor) FROM balance_transactions b WHERE b.payout_id = p.payout_id AND b.category <> 'payout') AS moved
       FROM payouts p WHERE p.tied_at IS NOT NULL AND p.booked_on <= ?`,
      [ACCOUNT.bank, asOf],
    );
    return rows.map((row) => ({
      label: `Payout of ${row.arrives_on}`,
      leftMinor: readMinor(row.posted),
      rightMinor: readMinor(row.moved),
      link: `/bank/payouts/${row.payout_id}`,
    }));
  },
};

export const TAKINGS_CONTROLS: readonly ProofControl[] = [
  receipts,
  receiptEntries,
  onlineClearing,
  tendersTaken,
  payouts,
];
