import { closeDay, countDay, enterTerminalBatch, getDay } from '#contract/closing';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { closeSiteDay, countDayComplete, enterBatch } from './close-day.ts';
import { readDay } from './day-read.ts';

export function closingRoutes(deps: Deps): BoundRoute[] {
  return [
    route(getDay, async ({ params, actor }) => {
      mustWorkAt(actor, params.siteId, 'site');
      return await readDay(deps.db, params.siteId, params.day, actor.userId);
    }),
    route(enterTerminalBatch, async ({ params, body, actor }) => {
      await enterBatch(deps, params, body, actor);
      return await readDay(deps.db, params.siteId, params.day, actor.userId);
    }),
    route(countDay, async ({ params, actor }) => {
      await countDayComplete(deps, params, actor);
      return await readDay(deps.db, params.siteId, params.day, actor.userId);
    }),
    route(closeDay, async ({ params, actor }) => {
      await closeSiteDay(deps, params, actor);
      return await readDay(deps.db, params.siteId, params.day, actor.userId);
    }),
  ];
}
