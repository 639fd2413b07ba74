import type { JournalEntryView } from '#contract/ledger';
import type { Eye } from '#domain/eye';
import { accountOf, type JournalEntry } from '#domain/ledger/index';
import type { CurrencyCode } from '#domain/money/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { type Db, rawRows, readMinor, type Trx } from '#server/platform/db';

/** What of the journal is asked for; sites bound it always. */
export interface JournalFilter {
  readonly siteIds: readonly number[];
  readonly from?: ClinicDate | undefined;
  readonly to?: ClinicDate | undefined;
  readonly account?: string | undefined;
  readonly courseId?: number | undefined;
  readonly kind?: string | undefined;
  readonly words?: string | undefined;
  readonly before?: number | undefined;
}

interface EntryRow {
  journal_entry_id: number;
  site_id: number;
  site_name: string;
  kind: string;
  source_type: string;
  source_id: number;
  occurred_on: ClinicDate;
  booked_on: ClinicDate;
  recorded_at: Instant;
  currency: CurrencyCode;
  memo: string;
  user_name: string | null;
  corrects_entry_id: number | null;
}

interface LineRow {
  journal_entry_id: number;
  line_no: number;
  account_code: string;
  amount_minor: number;
  course_id: number | null;
  course_number: string | null;
  eye: Eye | null;
  obligation_id: number | null;
  till_id: number | null;
  till_name: string | null;
  payee_id: number | null;
  payee_name: string | null;
}

function whereOf(filter: JournalFilter): { sql: string; bindings: unknown[] } {
  const parts: string[] = [`e.site_id IN (${filter.siteIds.map(() => '?').join(',')})`];
  const bindings: unknown[] = [...filter.siteIds];
  const add = (sql: string, value: unknown): void => {
    if (value === undefined) return;
    parts.push(sql);
    bindings.push(value);
  };
  add('e.booked_on >= ?', filter.from);
  add('e.booked_on <= ?', filter.to);
  add('e.kind = ?', filter.kind);
  add('e.journal_entry_id < ?', filter.before);
  add(
    'e.memo LIKE ?',
    filter.words === undefined ? undefined : `%${filter.words.replace(/[\\%_]/g, '\\$&')}%`,
  );
  add(
    'EXISTS (SELECT 1 FROM journal_lines x WHERE x.journal_entry_id = e.journal_entry_id AND x.account_code = ?)',
    filter.account,
  );
  add(
    'EXISTS (SELECT 1 FROM journal_lines x WHERE x.journal_entry_id = e.journal_entry_id AND x.course_id = ?)',
    filter.courseId,
  );
  return { sql: parts.join(' AND '), bindings };
}

async function entryRows(
  trx: Db | Trx,
  filter: JournalFilter,
  order: 'ASC' | 'DESC',
  limit: number | null,
): Promise<EntryRow[]> {
  if (filter.siteIds.length === 0) return [];
  const { sql, bindings } = whereOf(filter);
  return await rawRows<EntryRow>(
    trx,
    `SELECT e.journal_entry_id, e.site_id, s.name AS site_name, e.kind, e.source_type, e.source_id, e.occurred_on, e.booked_on,
            e.recorded_at, e.currency, e.memo, u.name AS user_name, e.corrects_entry_id
     FROM journal_entries e JOIN sites s ON s.site_id = e.site_id LEFT JOIN users u ON u.user_id = e.user_id
     WHERE ${sql} ORDER BY ${order === 'ASC' ? 'e.booked_on, e.journal_entry_id' : 'e.journal_entry_id DESC'}
     ${limit === null ? '' : `LIMIT ${limit}`}`,
    bindings,
  );
}

async function linesOf(trx: Db | Trx, entryIds: readonly number[]): Promise<Map<number, LineRow[]>> {
  const byEntry = new Map<number, LineRow[]>(entryIds.map((id) => [id, []]));
  for (let start = 0; start < entryIds.length; start += 1_000) {
    const ids = entryIds.slice(start, start + 1_000);
    const rows = await rawRows<LineRow>(
      trx,
      `SELECT l.journal_entry_id, l.line_no, l.account_code, l.amount_minor, l.course_id, c.number AS course_number, l.eye,
              l.obligation_id, l.till_id, t.name AS till_name, l.payee_id, u.name AS payee_name
       FROM journal_lines l LEFT JOIN courses c ON c.course_id = l.course_id LEFT JOIN tills t ON t.till_id = l.till_id
       LEFT JOIN users u ON u.user_id = l.payee_id
       WHERE l.journal_entry_id IN (${ids.map(() => '?').join(',')}) ORDER BY l.journal_entry_id, l.line_no`,
      ids,
    );
    for (const row of rows) byEntry.get(row.journal_entry_id)?.push(row);
  }
  return byEntry;
}

/** A page of the journal, newest first, for the screen. */
export async function readJournal(
  db: Db,
  filter: JournalFilter,
  limit: number,
): Promise<{ entries: JournalEntryView[]; more: boolean }> {
  const rows = await entryRows(db, filter, 'DESC', limit + 1);
  const page = rows.slice(0, limit);
  const lines = await linesOf(
    db,
    page.map((row) => row.journal_entry_id),
  );
  return {
    entries: page.map((row) => asView(row, lines.get(row.journal_entry_id) ?? [])),
    more: rows.length > limit,
  };
}

function asView(row: EntryRow, lines: readonly LineRow[]): JournalEntryView {
  return {
    entryId: row.journal_entry_id,
    siteId: row.site_id,
    siteName: row.site_name,
    kind: row.kind,
    sourceType: row.source_type,
    sourceId: row.source_id,
    occurredOn: row.occurred_on,
    bookedOn: row.booked_on,
    recordedAt: row.recorded_at,
    currency: row.currency,
    memo: row.memo,
    by: row.user_name,
    correctsEntryId: row.corrects_entry_id,
    lines: lines.map((line) => ({
      lineNo: line.line_no,
      account: line.account_code,
      accountName: accountOf(line.account_code)?.name ?? line.account_code,
      amountMinor: readMinor(line.amount_minor),
      courseId: line.course_id,
      courseNumber: line.course_number,
      eye: line.eye,
      tillName: line.till_name,
      payeeName: line.payee_name,
    })),
  };
}

/** Entries in the order of the books, as the plain-text export takes them. */
export async function readJournalEntries(trx: Db | Trx, filter: JournalFilter): Promise<JournalEntry[]> {
  const rows = await entryRows(trx, filter, 'ASC', null);
  const lines = await linesOf(
    trx,
    rows.map((row) => row.journal_entry_id),
  );
  return rows.map((row) => ({
    entryId: row.journal_entry_id,
    bookedOn: row.booked_on,
    occurredOn: row.occurred_on,
    kind: row.kind as JournalEntry['kind'],
    memo: row.memo,
    currency: row.currency,
    ...(row.corrects_entry_id === null ? {} : { correctsEntryId: row.corrects_entry_id }),
    lines: (lines.get(row.journal_entry_id) ?? []).map((line) => ({
      account: line.account_code,
      amountMinor: readMinor(line.amount_minor),
      ...(line.course_id === null ? {} : { courseId: line.course_id }),
      ...(line.eye === null ? {} : { eye: line.eye }),
      ...(line.obligation_id === null ? {} : { obligationId: line.obligation_id }),
      ...(line.till_id === null ? {} : { tillId: line.till_id }),
      ...(line.payee_id === null ? {} : { payeeId: line.payee_id }),
    })),
  }));
}
