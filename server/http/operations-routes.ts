import { ALL_CONTRACTS } from '#contract/index';
import { getHealth, getOpenApi, getReadiness } from '#contract/operations';
import type { Deps } from '#server/platform/deps';
import { Problem } from '#server/platform/problem';
import { openApiDocument } from './openapi.ts';
import { type BoundRoute, route } from './route.ts';

/** Health, readiness and the interface's own description. */
export function operationsRoutes({ db, config }: Pick<Deps, 'db' | 'config'>): BoundRoute[] {
  let document: ReturnType<typeof openApiDocument> | undefined;
  return [
    route(getHealth, () => Promise.resolve({ status: 'alive' as const })),
    route(getReadiness, async () => {
      try {
        await db.raw('SELECT 1').timeout(2_000);
      } catch {
        throw new Problem('unavailable', { detail: 'The database does not answer yet.', retryAfter: 2 });
      }
      return { status: 'ready' as const };
    }),
    route(getOpenApi, () => {
      document ??= openApiDocument(ALL_CONTRACTS, config.publicUrl);
      return Promise.resolve(document);
    }),
  ];
}
