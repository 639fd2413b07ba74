import { agreeFee, getFeeMonth, listFeeAgreements, listSurgeons } from '#contract/fees';
import { type BoundRoute, route } from '#server/http/route';
import { hasRole, type StaffActor } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { agreeSurgeonFee } from './agree-fee.ts';
import { agreementsOf } from './fee-repository.ts';
import { readFeeMonth, readSurgeons } from './fees-read.ts';

export function feesRoutes(deps: Deps): BoundRoute[] {
  return [
    route(
      listSurgeons,
      async ({ actor }) => await readSurgeons(deps.db, ownOnly(actor) ? actor.userId : undefined),
    ),
    route(getFeeMonth, async ({ params, query, actor }) => {
      mustSeeFeesOf(actor, params.surgeonId);
      return await readFeeMonth(deps, params.surgeonId, query.month);
    }),
    route(listFeeAgreements, async ({ params, actor }) => {
      mustSeeFeesOf(actor, params.surgeonId);
      return { agreements: await agreementsOf(deps.db, params.surgeonId) };
    }),
    route(
      agreeFee,
      async ({ params, body, actor }) =>
        await agreeSurgeonFee(deps, {
          surgeonUserId: params.surgeonId,
          ...body,
          agreedBy: actor.userId,
          actor,
        }),
    ),
  ];
}

/** A surgeon who is neither manager nor auditor sees own fees only. */
function ownOnly(actor: StaffActor): boolean {
  return !hasRole(actor, 'manager', 'auditor');
}

function mustSeeFeesOf(actor: StaffActor, surgeonId: number): void {
  if (ownOnly(actor) && actor.userId !== surgeonId) throw notFound('surgeon');
}
