import express, { type Express } from 'express';
import { pinoHttp } from 'pino-http';
import { approvalsRoutes } from '#server/features/approvals/index';
import { auditRoutes } from '#server/features/audit/index';
import { bankRoutes } from '#server/features/bank/index';
import { catalogueRoutes } from '#server/features/catalogue/index';
import { closingRoutes } from '#server/features/closing/index';
import { coursesRoutes, openCourse } from '#server/features/courses/index';
import { deliveryRoutes } from '#server/features/delivery/index';
import { type DocumentMakers, documentsRoutes, subscribeDocuments } from '#server/features/documents/index';
import { accrueCourseFees, feesRoutes } from '#server/features/fees/index';
import { ledgerRoutes } from '#server/features/ledger/index';
import { patientsRoutes } from '#server/features/patients/index';
import { paymentsRoutes, takeWebhook } from '#server/features/payments/index';
import { patientOfRequest, portalRoutes } from '#server/features/portal/index';
import { proofRoutes } from '#server/features/proof/index';
import { discountApproval, quotesRoutes } from '#server/features/quotes/index';
import { settingsRoutes } from '#server/features/settings/index';
import { tillsRoutes } from '#server/features/tills/index';
import { type LiveStreams, todayRoutes } from '#server/features/today/index';
import {
  checkRequestOrigin,
  type PeopleParts,
  sessionLayer,
  staffOfRequest,
  usersRoutes,
} from '#server/features/users/index';
import type { Gateways } from '#server/gateways/index';
import { bindRoutes, type Identity } from '#server/http/bind';
import { contentPolicy, serveClient } from '#server/http/client-files';
import { operationsRoutes } from '#server/http/operations-routes';
import { problemHandler, unknownRoute } from '#server/http/problem-handler';
import type { BoundRoute } from '#server/http/route';
import { mountStripeWebhook } from '#server/http/stripe-webhook';
import type { Deps } from '#server/platform/deps';

/** Everything the composition root hands to features. */
export type AppDeps = Deps & { readonly gateways: Gateways };

/** What belongs to one process or one test, beside the dependencies. */
export interface AppParts {
  readonly people: PeopleParts;
  readonly makers: DocumentMakers;
  readonly streams: LiveStreams;
  /** Folder of the built client; undefined serves the interface alone. */
  readonly clientFolder: string | undefined;
}

/** Every route of the application, features in their order. */
export function allRoutes(deps: AppDeps, parts: AppParts): BoundRoute[] {
  return [
    ...operationsRoutes(deps),
    ...usersRoutes(deps, parts.people),
    ...settingsRoutes(deps),
    ...approvalsRoutes(deps, [discountApproval]),
    ...auditRoutes(deps),
    ...patientsRoutes(deps),
    ...catalogueRoutes(deps),
    ...quotesRoutes(deps),
    ...coursesRoutes(deps),
    ...paymentsRoutes(deps),
    ...deliveryRoutes(deps),
    ...feesRoutes(deps),
    ...tillsRoutes(deps),
    ...closingRoutes(deps),
    ...bankRoutes(deps),
    ...ledgerRoutes(deps),
    ...documentsRoutes(deps, parts.makers),
    ...todayRoutes(deps, parts.streams),
    ...proofRoutes(deps),
    ...portalRoutes(deps, parts.makers),
  ];
}

/** Who listens to which facts, in one place; subscribers run in this order, in the transaction of the fact. */
export function subscribeAll({ facts, ...deps }: AppDeps): void {
  const withFacts = { ...deps, facts };
  facts.subscribe('quote.accepted', async (trx, fact) => {
    await openCourse(trx, withFacts, fact);
  });
  facts.subscribe('eye.done', (trx, fact) => accrueCourseFees(trx, withFacts, fact.courseId));
  facts.subscribe('receipt.recorded', (trx, fact) => accrueCourseFees(trx, withFacts, fact.courseId));
  subscribeDocuments(withFacts);
}

/** Builds the http application; listening, workers and the signal handlers are main's. */
export function createApp(deps: AppDeps, parts: AppParts): Express {
  const app = express();
  app.disable('x-powered-by');
  app.set('trust proxy', deps.config.trustProxy);
  app.use(...contentPolicy(deps.config));
  mountStripeWebhook(app, { take: (rawBody, signature) => takeWebhook(deps, rawBody, signature) });
  app.use(
    '/api',
    pinoHttp({
      logger: deps.log,
      serializers: { req: quietRequest, res: quietResponse },
      autoLogging: deps.config.logLevel !== 'silent',
    }),
    (_req, res, next) => {
      res.setHeader('Cache-Control', 'no-store');
      next();
    },
    express.json({ limit: '512kb' }),
    sessionLayer(deps),
  );
  bindRoutes(app, allRoutes(deps, parts), identityOf(deps));
  app.use('/api', unknownRoute);
  if (parts.clientFolder !== undefined) serveClient(app, parts.clientFolder);
  app.use(problemHandler(deps.log));
  return app;
}

function identityOf(deps: AppDeps): Identity {
  return {
    staffActor: (req) => staffOfRequest(deps, req),
    patientActor: (req) => patientOfRequest(deps, req),
    checkCsrf: (req, actor) => checkRequestOrigin(deps, req, actor),
  };
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
