import { type Db, rawRows, type Trx } from '#server/platform/db';
import { digests, FIRST_LINK, link, SEALED_TABLES } from './sealed-tables.ts';

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
