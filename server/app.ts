import express, { type Express } from 'express';
import { pinoHttp } from 'pino-http';
import { catalogueRoutes } from '#server/features/catalogue/index';
import { coursesRoutes, openCourse } from '#server/features/courses/index';
import { patientsRoutes } from '#server/features/patients/index';
import { quotesRoutes } from '#server/features/quotes/index';
import type { Gateways } from '#server/gateways/index';
import { bindRoutes, type Identity } from '#server/http/bind';
import { contentPolicy, serveClient } from '#server/http/client-files';
import { operationsRoutes } from '#server/http/operations-routes';
import { problemHandler, unknownRoute } from '#server/http/problem-handler';
import type { BoundRoute } from '#server/http/route';
import type { Deps } from '#server/platform/deps';

/** Everything the composition root hands to features. */
export type AppDeps = Deps & { readonly gateways: Gateways };

/** Every route of the application, features in their order. */
export function allRoutes(deps: AppDeps): BoundRoute[] {
  return [
    ...operationsRoutes(deps),
    ...catalogueRoutes(deps),
    ...patientsRoutes(deps),
    ...quotesRoutes(deps),
    ...coursesRoutes(deps),
  ];
}

/** Who listens to which facts, in one place. */
export function subscribeAll(deps: AppDeps): void {
  deps.facts.subscribe('quote.accepted', async (trx, fact) => {
    await openCourse(trx, deps, fact);
  });
}

/** Builds the http application; listening, workers and the signal handlers are main's. */
export function createApp(deps: AppDeps, identity: Identity, clientFolder: string | undefined): Express {
  const app = express();
  app.disable('x-powered-by');
  app.set('trust proxy', deps.config.trustProxy);
  app.use(...contentPolicy(deps.config));
  app.use(
    '/api',
    pinoHttp({
      logger: deps.log,
      serializers: { req: quietRequest, res: quietResponse },
      autoLogging: deps.config.logLevel !== 'silent',
    }),
  );
  app.use('/api', express.json({ limit: '512kb' }));
  app.use('/api', (_req, res, next) => {
    res.setHeader('Cache-Control', 'no-store');
    next();
  });
  bindRoutes(app, allRoutes(deps), identity);
  app.use('/api', unknownRoute);
  if (clientFolder) serveClient(app, clientFolder);
  app.use(problemHandler(deps.log));
  return app;
}

/** The route's shape is enough for the log; addresses of secret links and queries stay out of it. */
function quietRequest(req: { id: unknown; method: string; url: string }): unknown {
  return {
    id: req.id,
    method: req.method,
    path: req.url.split('?')[0]?.replace(/[A-Za-z0-9_-]{20,}/g, ':secret'),
  };
}

function quietResponse(res: { statusCode: number }): unknown {
  return { status: res.statusCode };
}
