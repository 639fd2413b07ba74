import { type Db, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { inTransaction } from '#server/platform/transaction';
import { digests, FIRST_LINK, link, SEALED_TABLES, type SealedTable } from './sealed-tables.ts';

const BATCH = 500;
/** Rows this far below the newest sealed one are looked at again: transactions commit out of order. */
const WINDOW = 5_000;
const LOCK_NAME = 'tenderlight-sealer';

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
