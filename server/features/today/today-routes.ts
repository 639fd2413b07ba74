import { followLive, getToday } from '#contract/today';
import { staffOfRequest } from '#server/features/users/index';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import type { LiveStreams } from './live.ts';
import { readToday } from './today-read.ts';

export function todayRoutes(deps: Deps, streams: LiveStreams): BoundRoute[] {
  return [
    route(getToday, async ({ params, query, actor }) => {
      mustWorkAt(actor, params.siteId, 'site');
      return await readToday(deps, params.siteId, query.day);
    }),
    route(followLive, ({ actor, raw }) => {
      const reload = (): Promise<boolean> =>
        new Promise((resolve) => raw.req.session.reload((error: unknown) => resolve(!error)));
      streams.follow(deps, raw.res, actor, async () => {
        return (await reload()) && (await staffOfRequest(deps, raw.req)) !== undefined;
      });
      return Promise.resolve(undefined);
    }),
  ];
}
