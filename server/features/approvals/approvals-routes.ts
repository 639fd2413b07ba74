import { decideApproval, listApprovals } from '#contract/approvals';
import { type BoundRoute, route } from '#server/http/route';
import type { Deps } from '#server/platform/deps';
import { type ApprovalKind, decideAsked, readApprovals } from './approvals.ts';

/** @param kinds what can be approved, each with its effect; the composition root hands them in */
export function approvalsRoutes(deps: Deps, kinds: readonly ApprovalKind[]): BoundRoute[] {
  return [
    route(listApprovals, async ({ actor }) => ({ approvals: await readApprovals(deps.db, actor) })),
    route(
      decideApproval,
      async ({ params, body, actor }) =>
        await decideAsked(deps, kinds, params.approvalId, { approve: body.approve, note: body.note }, actor),
    ),
  ];
}
