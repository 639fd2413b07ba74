import type { Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { signIn as signInContract } from '#contract/session';
import { type AppDeps, type AppParts, createApp, subscribeAll } from '#server/app';
import { sealEverything } from '#server/features/audit/index';
import { deliverDueMails, documentMakers, peopleMails } from '#server/features/documents/index';
import { handleDueEvents } from '#server/features/payments/index';
import { LiveStreams } from '#server/features/today/index';
import { passwordHashing, type SignInLimits } from '#server/features/users/index';
import { smtpGateway, stripeGateway } from '#server/gateways/index';
import { eventHandlers } from '#server/jobs/jobs';
import { type Clock, systemClock } from '#server/platform/clock';
import { readConfig } from '#server/platform/config';
import { openDatabase } from '#server/platform/db';
import { createFacts } from '#server/platform/facts';
import { createLog } from '#server/platform/log';
import { Agent } from './agent.ts';
import { type TestDatabase, testDatabase } from './test-database.ts';

export const TEST_PASSWORD = 'a long test password';

export interface TestApp {
  readonly baseUrl: string;
  readonly deps: AppDeps;
  /** A browser that is nobody yet. */
  agent(): Agent;
  /** A browser signed in as the person with this address (made by makeUser). */
  signIn(email: string): Promise<Agent>;
  /** Does what the workers do, until nothing is left: events, mails, seals. */
  settle(): Promise<void>;
  stop(): Promise<void>;
}

export interface TestAppOptions {
  readonly clock?: Clock;
  /** API address of a stand-in; without one every outside call fails at once. */
  readonly stripeUrl?: string;
  readonly smtpUrl?: string;
  readonly limits?: SignInLimits;
  readonly clientFolder?: string;
  /** Another database than the worker's. */
  readonly database?: TestDatabase;
  /** Port 0 picks a free one. */
  readonly port?: number;
}

/** The whole application on the worker's database, listening on a free port. Workers run only when a test calls settle(). */
export async function testApp(options: TestAppOptions = {}): Promise<TestApp> {
  const { appUrl } = options.database ?? (await testDatabase());
  const stripe = new URL(options.stripeUrl ?? 'http://127.0.0.1:9');
  const config = readConfig({
    NODE_ENV: 'test',
    DATABASE_URL: appUrl,
    SESSION_SECRET: 'a secret of tests, long enough to pass',
    STRIPE_SECRET_KEY: 'sk_test_tenderlight_local',
    STRIPE_WEBHOOK_SECRET: 'whsec_tenderlight_local',
    STRIPE_API_HOST: stripe.hostname,
    STRIPE_API_PORT: stripe.port,
    STRIPE_API_PROTOCOL: 'http',
    SMTP_URL: options.smtpUrl ?? 'smtp://127.0.0.1:9',
    LOG_LEVEL: process.env.TEST_LOG ?? 'silent',
  });
  const deps: AppDeps = {
    db: openDatabase(appUrl, { min: 0, max: 8 }),
    log: createLog(config.logLevel),
    config,
    clock: options.clock ?? systemClock,
    facts: createFacts(),
    gateways: { mail: smtpGateway(config.smtpUrl, config.mailFrom), stripe: stripeGateway(config.stripe) },
  };
  const hashing = passwordHashing(true);
  const parts: AppParts = {
    people: { hashing, mails: peopleMails, ...(options.limits ? { limits: options.limits } : {}) },
    makers: documentMakers(),
    streams: new LiveStreams(),
    clientFolder: options.clientFolder,
  };
  subscribeAll(deps);
  const server = createApp(deps, parts).listen(options.port ?? 0, '127.0.0.1');
  await new Promise((resolve) => server.once('listening', resolve));
  const baseUrl = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  // Links in mails and return addresses lead to where this test listens.
  (config as { publicUrl: string }).publicUrl = baseUrl;
  return {
    baseUrl,
    deps,
    agent: () => new Agent(baseUrl),
    async signIn(email) {
      const agent = new Agent(baseUrl);
      const session = await agent.call(signInContract, { body: { email, password: TEST_PASSWORD } });
      agent.csrfToken = session.csrfToken;
      return agent;
    },
    async settle() {
      const handlers = eventHandlers();
      while ((await handleDueEvents(deps, handlers)) > 0);
      while ((await deliverDueMails(deps, parts.makers)) > 0);
      await sealEverything(deps);
    },
    stop: () => stopApp(deps, parts, server),
  };
}

async function stopApp(deps: AppDeps, parts: AppParts, server: Server): Promise<void> {
  parts.streams.stop();
  const closed = new Promise((resolve) => server.close(resolve));
  server.closeAllConnections();
  await closed;
  deps.gateways.mail.close();
  await deps.db.destroy();
}
