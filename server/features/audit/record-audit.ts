import { createHash } from 'node:crypto';
import { type Actor, userIdOf } from '#server/platform/actor';
import { insertRow, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';

/** One thing somebody did: who, what, to what, before and after. */
export interface AuditNote {
  readonly actor: Actor;
  /** Verb of the trade with its feature: 'receipt.taken', 'quote.issued'. */
  readonly action: string;
  readonly subjectType: string;
  readonly subjectId: number | string;
  readonly siteId?: number;
  readonly before?: unknown;
  readonly after?: unknown;
}

/**
 * Writes one row of the trail in the caller's transaction. The row holds a digest of the values; the values, which may
 * be personal, sit beside it and can be erased without breaking the chain that the sealer builds over the rows.
 */
export async function recordAudit(trx: Trx, deps: Pick<Deps, 'clock'>, note: AuditNote): Promise<number> {
  const before = JSON.stringify(note.before ?? null);
  const after = JSON.stringify(note.after ?? null);
  const auditRowId = await insertRow(trx, 'audit_rows', {
    recorded_at: sqlInstant(deps.clock.now()),
    actor_kind: note.actor.kind,
    user_id: userIdOf(note.actor),
    action: note.action,
    subject_type: note.subjectType,
    subject_id: String(note.subjectId),
    site_id: note.siteId ?? null,
    came_from: note.actor.from,
    values_digest: createHash('sha256').update(before).update('\u0000').update(after).digest(),
  });
  if (note.before !== undefined || note.after !== undefined) {
    await trx('audit_values').insert({ audit_row_id: auditRowId, before_value: before, after_value: after });
  }
  return auditRowId;
}
