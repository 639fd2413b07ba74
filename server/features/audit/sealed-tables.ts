import { createHash } from 'node:crypto';
import { type Db, rawRows, type Trx } from '#server/platform/db';

/** A table whose rows are sealed, with the child rows that belong to each. Columns are read by name, in this order. */
export interface SealedTable {
  readonly table: string;
  readonly key: string;
  readonly columns: readonly string[];
  readonly children?: { readonly table: string; readonly order: string; readonly columns: readonly string[] };
  /** Word for a row in findings: "Entry", "Receipt". */
  readonly word: string;
  /** The moment a row was written. */
  readonly at: string;
}

/** What cannot be changed unnoticed: every column of entries, lines, receipts, tenders, voids, fees and the trail itself. */
export const SEALED_TABLES: readonly SealedTable[] = [
  {
    table: 'journal_entries',
    key: 'journal_entry_id',
    word: 'Entry',
    at: 'recorded_at',
    columns: [
      'site_id',
      'kind',
      'source_type',
      'source_id',
      'occurred_on',
      'booked_on',
      'recorded_at',
      'currency',
      'memo',
      'user_id',
      'corrects_entry_id',
    ],
    children: {
      table: 'journal_lines',
      order: 'line_no',
      columns: [
        'journal_line_id',
        'line_no',
        'site_id',
        'booked_on',
        'account_code',
        'currency',
        'amount_minor',
        'course_id',
        'eye',
        'obligation_id',
        'till_id',
        'payee_id',
      ],
    },
  },
  {
    table: 'receipts',
    key: 'receipt_id',
    word: 'Receipt',
    at: 'recorded_at',
    columns: [
      'number',
      'site_id',
      'series_year',
      'series_no',
      'course_id',
      'patient_id',
      'payer_name',
      'currency',
      'applied_minor',
      'credit_minor',
      'change_minor',
      'rounding_minor',
      'total_minor',
      'occurred_on',
      'booked_on',
      'recorded_at',
      'taken_by',
      'till_session_id',
      'attempt_key',
    ],
    children: {
      table: 'receipt_tenders',
      order: 'tender_no',
      columns: ['receipt_tender_id', 'tender_no', 'tender', 'amount_minor', 'reference', 'charge_id'],
    },
  },
  {
    table: 'receipt_voids',
    key: 'receipt_void_id',
    word: 'Void',
    at: 'recorded_at',
    columns: ['receipt_id', 'reason', 'booked_on', 'voided_by', 'recorded_at'],
  },
  {
    table: 'fee_lines',
    key: 'fee_line_id',
    word: 'Fee line',
    at: 'recorded_at',
    columns: [
      'surgeon_user_id',
      'fee_agreement_id',
      'site_id',
      'course_id',
      'eye',
      'kind',
      'currency',
      'amount_minor',
      'earned_on',
      'booked_on',
      'derivation',
      'claws_back_line_id',
      'recorded_at',
    ],
  },
  {
    table: 'audit_rows',
    key: 'audit_row_id',
    word: 'Audit row',
    at: 'recorded_at',
    columns: [
      'recorded_at',
      'actor_kind',
      'user_id',
      'action',
      'subject_type',
      'subject_id',
      'site_id',
      'came_from',
      'values_digest',
    ],
  },
];

/** What the first seal follows. */
export const FIRST_LINK = Buffer.alloc(32);

/** Digests of rows by key, each over all sealed columns and child rows. */
export async function digests(
  trx: Db | Trx,
  table: SealedTable,
  ids: readonly number[],
): Promise<Map<number, Buffer>> {
  const marks = ids.map(() => '?').join(',');
  const rows = await rawRows<Record<string, unknown>>(
    trx,
    `SELECT ${table.key}, ${table.columns.join(', ')} FROM ${table.table} WHERE ${table.key} IN (${marks})`,
    ids,
  );
  const children = new Map<number, unknown[]>();
  if (table.children) {
    const found = await rawRows<Record<string, unknown>>(
      trx,
      `SELECT ${table.key}, ${table.children.columns.join(', ')} FROM ${table.children.table} WHERE ${table.key} IN (${marks})
       ORDER BY ${table.key}, ${table.children.order}`,
      ids,
    );
    for (const child of found) {
      const parent = child[table.key] as number;
      children.set(parent, [
        ...(children.get(parent) ?? []),
        table.children.columns.map((column) => plain(child[column])),
      ]);
    }
  }
  return new Map(
    rows.map((row) => {
      const id = row[table.key] as number;
      const content = JSON.stringify([
        table.table,
        id,
        table.columns.map((column) => plain(row[column])),
        children.get(id) ?? [],
      ]);
      return [id, createHash('sha256').update(content).digest()];
    }),
  );
}

function plain(value: unknown): unknown {
  return Buffer.isBuffer(value) ? value.toString('hex') : value;
}

/** The seal of a row: everything before it, which row it is, and what the row says. */
export function link(previous: Buffer, table: string, id: number, digest: Buffer): Buffer {
  return createHash('sha256').update(previous).update(`${table}:${id}:`).update(digest).digest();
}
