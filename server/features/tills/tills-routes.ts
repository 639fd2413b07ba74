import { closeTill, countTill, explainTill, listTills, moveTillCash, openTill } from '#contract/tills';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { closeTillShift, countTillCash, explainTillDifference, moveCash, openTillShift } from './run-till.ts';
import { readTillSessionById, readTills } from './tills-read.ts';

export function tillsRoutes(deps: Deps): BoundRoute[] {
  return [
    route(listTills, async ({ params, query, actor }) => {
      mustWorkAt(actor, params.siteId, 'site');
      return await readTills(deps, params.siteId, query.day, actor.userId);
    }),
    route(openTill, async ({ params, body, actor }) => {
      const tillSessionId = await openTillShift(deps, params.tillId, body.floatMinor, actor);
      return await readTillSessionById(deps.db, tillSessionId, actor.userId);
    }),
    route(moveTillCash, async ({ params, body, actor }) => {
      await moveCash(deps, params.tillSessionId, body, actor);
      return await readTillSessionById(deps.db, params.tillSessionId, actor.userId);
    }),
    route(countTill, async ({ params, body, actor }) => {
      await countTillCash(deps, params.tillSessionId, body.count, actor);
      return await readTillSessionById(deps.db, params.tillSessionId, actor.userId);
    }),
    route(explainTill, async ({ params, body, actor }) => {
      await explainTillDifference(deps, params.tillSessionId, body.reason, actor);
      return await readTillSessionById(deps.db, params.tillSessionId, actor.userId);
    }),
    route(closeTill, async ({ params, body, actor }) => {
      await closeTillShift(deps, params.tillSessionId, body.nextFloatMinor, actor);
      return await readTillSessionById(deps.db, params.tillSessionId, actor.userId);
    }),
  ];
}
