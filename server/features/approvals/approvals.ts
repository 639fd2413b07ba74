import type { ApprovalView } from '#contract/approvals';
import type { Role } from '#contract/define';
import type { Minor } from '#domain/money/index';
import type { Instant } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { hasRole, mustWorkAt, type StaffActor } from '#server/platform/actor';
import { type Db, insertRow, rawRows, readMinor, sqlInstant, type Trx } from '#server/platform/db';
import { isDuplicate } from '#server/platform/db-errors';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { conflict, notFound, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';

/** What is asked of a second person. */
export interface ApprovalAsked {
  readonly kind: string;
  readonly subjectType: string;
  readonly subjectId: number;
  readonly siteId: number;
  readonly amountMinor?: Minor;
  readonly reason: string;
  /** What the effect needs to know, frozen when it is asked. */
  readonly payload: unknown;
  readonly actor: StaffActor;
}

/** A kind of approval: who may decide it, and what happens in the same transaction when it is approved. */
export interface ApprovalKind {
  readonly kind: string;
  readonly decidedBy: readonly Role[];
  /** Largest amount a decider of these roles may approve; absent: any. */
  readonly limitMinor?: Minor;
  onApproved(trx: Trx, approval: ApprovalRow, decider: StaffActor): Promise<void>;
}

export interface ApprovalRow {
  readonly approvalId: number;
  readonly kind: string;
  readonly subjectType: string;
  readonly subjectId: number;
  readonly siteId: number;
  readonly siteName: string;
  readonly amountMinor: Minor | null;
  readonly reason: string;
  readonly payload: unknown;
  readonly state: ApprovalView['state'];
  readonly requestedById: number;
  readonly requestedBy: string;
  readonly requestedAt: Instant;
  readonly decidedBy: string | null;
  readonly decidedAt: Instant | null;
  readonly decisionNote: string | null;
}

async function approvalsWhere(
  trx: Db | Trx,
  where: string,
  bindings: readonly unknown[],
): Promise<ApprovalRow[]> {
  const rows = await rawRows<{
    approval_id: number;
    kind: string;
    subject_type: string;
    subject_id: number;
    site_id: number;
    site_name: string;
    amount_minor: number | null;
    reason: string;
    payload: string;
    state: ApprovalView['state'];
    requested_by: number;
    requester: string;
    requested_at: Instant;
    decider: string | null;
    decided_at: Instant | null;
    decision_note: string | null;
  }>(
    trx,
    `SELECT a.approval_id, a.kind, a.subject_type, a.subject_id, a.site_id, s.name AS site_name, a.amount_minor, a.reason, a.payload, a.state,
            a.requested_by, q.name AS requester, a.requested_at, d.name AS decider, a.decided_at, a.decision_note
     FROM approvals a JOIN sites s ON s.site_id = a.site_id JOIN users q ON q.user_id = a.requested_by
     LEFT JOIN users d ON d.user_id = a.decided_by WHERE ${where}`,
    bindings,
  );
  return rows.map((row) => ({
    approvalId: row.approval_id,
    kind: row.kind,
    subjectType: row.subject_type,
    subjectId: row.subject_id,
    siteId: row.site_id,
    siteName: row.site_name,
    amountMinor: row.amount_minor === null ? null : readMinor(row.amount_minor),
    reason: row.reason,
    payload: JSON.parse(row.payload),
    state: row.state,
    requestedById: row.requested_by,
    requestedBy: row.requester,
    requestedAt: row.requested_at,
    decidedBy: row.decider,
    decidedAt: row.decided_at,
    decisionNote: row.decision_note,
  }));
}

/** Asks for a second person, in the caller's transaction; one open request per kind and subject. */
export async function askApproval(
  trx: Trx,
  deps: Pick<Deps, 'clock'>,
  asked: ApprovalAsked,
): Promise<number> {
  try {
    const approvalId = await insertRow(trx, 'approvals', {
      kind: asked.kind,
      subject_type: asked.subjectType,
      subject_id: asked.subjectId,
      site_id: asked.siteId,
      amount_minor: asked.amountMinor ?? null,
      reason: asked.reason,
      payload: JSON.stringify(asked.payload),
      state: 'asked',
      requested_by: asked.actor.userId,
      requested_at: sqlInstant(deps.clock.now()),
    });
    await recordAudit(trx, deps, {
      actor: asked.actor,
      action: `${asked.kind}.asked`,
      subjectType: 'approval',
      subjectId: approvalId,
      siteId: asked.siteId,
      after: {
        subjectType: asked.subjectType,
        subjectId: asked.subjectId,
        amountMinor: asked.amountMinor ?? null,
        reason: asked.reason,
      },
    });
    await hint(trx, deps.clock, { siteId: asked.siteId, topic: 'approvals', subjectId: approvalId });
    return approvalId;
  } catch (error) {
    if (isDuplicate(error, 'approvals_one_open'))
      throw conflict('already_asked', 'This was asked already and waits for a decision.');
    throw error;
  }
}

/**
 * Decides what another person asked for; approving runs its effect in the same transaction (invariant 18: people are compared,
 * not roles). @throws Problem not_found, conflict 'already_decided', refused 'own_request' | 'over_limit' | 'not_for_role'
 */
export async function decideAsked(
  deps: Deps,
  kinds: readonly ApprovalKind[],
  approvalId: number,
  decision: { readonly approve: boolean; readonly note: string | undefined },
  actor: StaffActor,
): Promise<ApprovalView> {
  return await inTransaction(deps.db, async (trx) => {
    await rawRows(trx, 'SELECT approval_id FROM approvals WHERE approval_id = ? FOR UPDATE', [approvalId]);
    const [approval] = await approvalsWhere(trx, 'a.approval_id = ?', [approvalId]);
    if (!approval) throw notFound('approval');
    mustWorkAt(actor, approval.siteId, 'approval');
    if (approval.state !== 'asked') throw conflict('already_decided', `This was ${approval.state} already.`);
    if (approval.requestedById === actor.userId)
      throw refused('own_request', 'Another person decides what you asked for.');
    const kind = kinds.find((each) => each.kind === approval.kind);
    if (!kind) throw notFound('kind of approval');
    mustMayDecide(kind, approval, actor);
    await trx('approvals')
      .where({ approval_id: approvalId })
      .update({
        state: decision.approve ? 'approved' : 'refused',
        decided_by: actor.userId,
        decided_at: sqlInstant(deps.clock.now()),
        decision_note: decision.note ?? null,
      });
    if (decision.approve) await kind.onApproved(trx, approval, actor);
    await recordAudit(trx, deps, {
      actor,
      action: `${approval.kind}.${decision.approve ? 'approved' : 'refused'}`,
      subjectType: 'approval',
      subjectId: approvalId,
      siteId: approval.siteId,
      after: { note: decision.note ?? null },
    });
    await hint(trx, deps.clock, { siteId: approval.siteId, topic: 'approvals', subjectId: approvalId });
    const [decided] = await approvalsWhere(trx, 'a.approval_id = ?', [approvalId]);
    if (!decided) throw notFound('approval');
    return approvalView(decided, actor.userId);
  });
}

function mustMayDecide(kind: ApprovalKind, approval: ApprovalRow, actor: StaffActor): void {
  if (!hasRole(actor, ...kind.decidedBy))
    throw refused('not_for_role', 'Somebody with another role decides this.');
  if (kind.limitMinor !== undefined && (approval.amountMinor ?? 0) > kind.limitMinor) {
    throw refused('over_limit', 'This is more than you may approve.');
  }
}

/** Whether something was approved lately by somebody else: what a use case asks before it goes over a limit. */
export async function approvedPayload(
  trx: Db | Trx,
  kind: string,
  subjectType: string,
  subjectId: number,
): Promise<unknown> {
  const [row] = await approvalsWhere(
    trx,
    "a.kind = ? AND a.subject_type = ? AND a.subject_id = ? AND a.state = 'approved' ORDER BY a.approval_id DESC LIMIT 1",
    [kind, subjectType, subjectId],
  );
  return row?.payload;
}

/** What waits and what was decided lately at the person's sites. */
export async function readApprovals(db: Db, actor: StaffActor): Promise<ApprovalView[]> {
  if (actor.siteIds.length === 0) return [];
  const sites = actor.siteIds.map(() => '?').join(',');
  const rows = await approvalsWhere(
    db,
    `a.site_id IN (${sites}) ORDER BY a.state <> 'asked', a.approval_id DESC LIMIT 100`,
    actor.siteIds,
  );
  return rows.map((row) => approvalView(row, actor.userId));
}

function approvalView(row: ApprovalRow, userId: number): ApprovalView {
  const { payload: _payload, requestedById, ...rest } = row;
  return { ...rest, requestedByMe: requestedById === userId };
}
