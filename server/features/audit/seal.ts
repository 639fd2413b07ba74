import { createHash } from 'node:crypto';
import { type Db, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { inTransaction } from '#server/platform/transaction';

/** A table whose rows are sealed, with the child rows that belong to each. Columns are read by name, in this order. */
interface SealedTable {
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

const FIRST_LINK = Buffer.alloc(32);
const BATCH = 500;
/** Rows this far below the newest sealed one are looked at again: transactions commit out of order. */
const WINDOW = 5_000;
const LOCK_NAME = 'tenderlight-sealer';

/** Digests of rows by key, each over all sealed columns and child rows. */
async function digests(
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

function link(previous: Buffer, table: string, id: number, digest: Buffer): Buffer {
  return createHash('sha256').update(previous).update(`${table}:${id}:`).update(digest).digest();
}

/**
 * Seals rows that are not yet in the chain, one sealer at a time across processes; writers never wait for it.
 * @param full looks at every row instead of a window below the newest sealed ones: at start
 * @returns how many rows were sealed
 */
export async function sealRows(deps: Pick<Deps, 'db' | 'clock'>, full = false): Promise<number> {
  return await inTransaction(deps.db, async (trx) => {
    const [lock] = await rawRows<{ got: number | null }>(trx, 'SELECT GET_LOCK(?, 0) AS got', [LOCK_NAME]);
    if (lock?.got !== 1) return 0;
    try {
      let sealed = 0;
      for (const table of SEALED_TABLES) sealed += await sealTable(trx, deps, table, full);
      return sealed;
    } finally {
      await rawRows(trx, 'SELECT RELEASE_LOCK(?) AS released', [LOCK_NAME]);
    }
  });
}

async function sealTable(
  trx: Trx,
  deps: Pick<Deps, 'clock'>,
  table: SealedTable,
  full: boolean,
): Promise<number> {
  const [newest] = await rawRows<{ id: number | null }>(
    trx,
    'SELECT MAX(subject_id) AS id FROM audit_seals WHERE subject_table = ?',
    [table.table],
  );
  const from = full ? 0 : Math.max(0, (newest?.id ?? 0) - WINDOW);
  const open = await rawRows<{ id: number }>(
    trx,
    `SELECT t.${table.key} AS id FROM ${table.table} t
     LEFT JOIN audit_seals s ON s.subject_table = ? AND s.subject_id = t.${table.key}
     WHERE t.${table.key} > ? AND s.audit_seal_id IS NULL ORDER BY t.${table.key} LIMIT ${BATCH}`,
    [table.table, from],
  );
  if (open.length === 0) return 0;
  const found = await digests(
    trx,
    table,
    open.map((row) => row.id),
  );
  let previous = (await chainHead(trx)) ?? FIRST_LINK;
  const seals = open.flatMap(({ id }) => {
    const digest = found.get(id);
    if (!digest) return [];
    const seal = link(previous, table.table, id, digest);
    const row = {
      subject_table: table.table,
      subject_id: id,
      subject_digest: digest,
      previous_hash: previous,
      seal_hash: seal,
      sealed_at: sqlInstant(deps.clock.now()),
    };
    previous = seal;
    return [row];
  });
  await trx('audit_seals').insert(seals);
  return seals.length;
}

/** Seals until nothing is left: for seeds, tests and before a report that prints the chain's head. */
export async function sealEverything(deps: Pick<Deps, 'db' | 'clock'>): Promise<void> {
  while ((await sealRows(deps, true)) > 0);
}

/** The newest seal, which stands for everything before it; null when nothing was sealed yet. */
export async function chainHead(trx: Db | Trx): Promise<Buffer | null> {
  const [head] = await rawRows<{ seal_hash: Buffer }>(
    trx,
    'SELECT seal_hash FROM audit_seals ORDER BY audit_seal_id DESC LIMIT 1',
  );
  return head?.seal_hash ?? null;
}

/** Something of the chain that is not as it was sealed. */
export interface SealFinding {
  readonly label: string;
  readonly finding: string;
  readonly table: string;
  readonly id: number;
}

interface SealRow {
  audit_seal_id: number;
  subject_table: string;
  subject_id: number;
  subject_digest: Buffer;
  previous_hash: Buffer;
  seal_hash: Buffer;
}

/** Walks the whole chain and every sealed row, and names what was changed, removed, or never sealed. */
export async function verifyChain(
  trx: Db | Trx,
  unsealedBefore: string,
): Promise<{ checked: number; findings: SealFinding[] }> {
  const findings: SealFinding[] = [];
  let previous: Buffer = FIRST_LINK;
  let checked = 0;
  for (let after = 0; ; ) {
    const seals = await rawRows<SealRow>(
      trx,
      `SELECT audit_seal_id, subject_table, subject_id, subject_digest, previous_hash, seal_hash FROM audit_seals
       WHERE audit_seal_id > ? ORDER BY audit_seal_id LIMIT 2000`,
      [after],
    );
    if (seals.length === 0) break;
    for (const seal of seals) {
      const right = link(previous, seal.subject_table, seal.subject_id, seal.subject_digest);
      if (!seal.previous_hash.equals(previous) || !seal.seal_hash.equals(right)) {
        findings.push({
          label: `Seal ${seal.audit_seal_id}`,
          finding: 'does not follow from the one before it',
          table: 'audit_seals',
          id: seal.audit_seal_id,
        });
      }
      previous = seal.seal_hash;
    }
    findings.push(...(await changedRows(trx, seals)));
    checked += seals.length;
    after = seals.at(-1)?.audit_seal_id ?? after;
  }
  findings.push(...(await unsealedRows(trx, unsealedBefore)));
  return { checked, findings };
}

async function changedRows(trx: Db | Trx, seals: readonly SealRow[]): Promise<SealFinding[]> {
  const findings: SealFinding[] = [];
  for (const table of SEALED_TABLES) {
    const own = seals.filter((seal) => seal.subject_table === table.table);
    if (own.length === 0) continue;
    const now = await digests(
      trx,
      table,
      own.map((seal) => seal.subject_id),
    );
    for (const seal of own) {
      const digest = now.get(seal.subject_id);
      if (digest?.equals(seal.subject_digest)) continue;
      const finding = digest ? 'was changed after it was sealed' : 'was removed after it was sealed';
      findings.push({
        label: `${table.word} ${seal.subject_id}`,
        finding,
        table: table.table,
        id: seal.subject_id,
      });
    }
  }
  return findings;
}

async function unsealedRows(trx: Db | Trx, before: string): Promise<SealFinding[]> {
  const findings: SealFinding[] = [];
  for (const table of SEALED_TABLES) {
    const rows = await rawRows<{ id: number }>(
      trx,
      `SELECT t.${table.key} AS id FROM ${table.table} t LEFT JOIN audit_seals s ON s.subject_table = ? AND s.subject_id = t.${table.key}
       WHERE s.audit_seal_id IS NULL AND t.${table.at} < ? LIMIT 50`,
      [table.table, before],
    );
    findings.push(
      ...rows.map(({ id }) => ({
        label: `${table.word} ${id}`,
        finding: 'was never sealed',
        table: table.table,
        id,
      })),
    );
  }
  return findings;
}
