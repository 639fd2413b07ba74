import { existsSync } from 'node:fs';
import type { Server } from 'node:http';
import { fileURLToPath } from 'node:url';
import { type AppDeps, type AppParts, createApp, subscribeAll } from '#server/app';
import { sealEverything } from '#server/features/audit/index';
import { documentMakers, peopleMails } from '#server/features/documents/index';
import { LiveStreams } from '#server/features/today/index';
import { passwordHashing, userByEmail } from '#server/features/users/index';
import { smtpGateway, stripeGateway } from '#server/gateways/index';
import { allJobs } from '#server/jobs/jobs';
import { type RunningLoop, startLoop } from '#server/jobs/loop';
import { systemClock } from '#server/platform/clock';
import { ConfigError, DEMO_PASSWORD, readConfig } from '#server/platform/config';
import { openDatabase } from '#server/platform/db';
import { createFacts } from '#server/platform/facts';
import { createLog } from '#server/platform/log';

const CLIENT = fileURLToPath(
  new URL(import.meta.url.endsWith('.ts') ? '../dist/client' : '../client', import.meta.url),
);
const STOP_WITHIN_MS = 10_000;
/** How long requests under way may take once the process is asked to stop. */
const REQUESTS_WITHIN_MS = 3_000;

async function main(): Promise<void> {
  const config = readConfig(process.env);
  const log = createLog(config.logLevel);
  const db = openDatabase(config.databaseUrl, { min: 1, max: 12 });
  const deps: AppDeps = {
    db,
    log,
    config,
    clock: systemClock,
    facts: createFacts(),
    gateways: { mail: smtpGateway(config.smtpUrl, config.mailFrom), stripe: stripeGateway(config.stripe) },
  };
  if (config.mode === 'production') await refuseDemoPasswords(deps);
  const parts: AppParts = {
    people: { hashing: passwordHashing(config.test), mails: peopleMails },
    makers: documentMakers(),
    streams: new LiveStreams(),
    clientFolder: existsSync(CLIENT) ? CLIENT : undefined,
  };
  subscribeAll(deps);
  const server = createApp(deps, parts).listen(config.port, config.host);
  await listening(server);
  log.info({ port: config.port }, 'listening');
  await sealEverything(deps);
  const loops = allJobs(deps, parts.makers).map((job) => startLoop(job, log));
  stopOnSignals(deps, parts, server, loops);
}

/** Production does not start while somebody still has the demonstration's password. */
async function refuseDemoPasswords(deps: AppDeps): Promise<void> {
  const hashing = passwordHashing(false);
  for (const name of [
    'counsellor',
    'desk',
    'desk2',
    'surgeon',
    'surgeon2',
    'manager',
    'manager2',
    'auditor',
  ]) {
    const user = await userByEmail(deps.db, `${name}@tenderlight.example`);
    if (user?.state === 'active' && (await hashing.matches(user.passwordHash, DEMO_PASSWORD))) {
      throw new ConfigError(
        `Production mode refuses: ${user.email} still has the demonstration's password. Let that person leave first.`,
      );
    }
  }
}

function listening(server: Server): Promise<void> {
  return new Promise((resolve, reject) => {
    server.once('listening', resolve);
    server.once('error', reject);
  });
}

/** Takes no new requests, ends live streams, lets requests and jobs under way finish, then lets go of the database. */
function stopOnSignals(deps: AppDeps, parts: AppParts, server: Server, loops: readonly RunningLoop[]): void {
  let stopping = false;
  const stop = async (): Promise<void> => {
    const closed = new Promise<void>((resolve) => server.close(() => resolve()));
    parts.streams.stop();
    server.closeIdleConnections();
    // A connection a browser opened ahead of need counts as busy until its first request.
    const late = setTimeout(() => server.closeAllConnections(), REQUESTS_WITHIN_MS);
    await Promise.all(loops.map((loop) => loop.stop()));
    await closed;
    clearTimeout(late);
    deps.gateways.mail.close();
    await deps.db.destroy();
  };
  const onSignal = (): void => {
    if (stopping) return;
    stopping = true;
    const late = setTimeout(() => process.exit(1), STOP_WITHIN_MS);
    late.unref();
    stop().then(
      () => process.exit(0),
      () => process.exit(1),
    );
  };
  process.on('SIGTERM', onSignal);
  process.on('SIGINT', onSignal);
}

main().catch((error: unknown) => {
  const words =
    error instanceof ConfigError
      ? error.message
      : `Tenderlight could not start: ${error instanceof Error ? error.message : String(error)}`;
  process.stderr.write(`${words}\n`);
  process.exit(1);
});
