import { randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { build } from './build.ts';
import { type Child, endChild, readyLine, runToEnd, startChild } from './children.ts';
import { startPrivateMariadb } from './private-mariadb.ts';
import { letStartGo, runningStart, takeStart } from './single-start.ts';

const TSX = ['--conditions=source', '--import', 'tsx'];
const PASSWORD = process.env.DEMO_PASSWORD || 'lantern-quay-demo';
const PEOPLE = ['counsellor', 'desk', 'desk2', 'surgeon', 'surgeon2', 'manager', 'manager2', 'auditor'];

const ports = {
  app: portFrom('PORT', 5180),
  database: portFrom('TENDERLIGHT_DB_PORT', 33180),
  stripe: portFrom('STRIPE_MOCK_PORT', 5181),
  stripeControl: portFrom('STRIPE_MOCK_CONTROL_PORT', 5182),
  smtp: portFrom('MAILBOX_SMTP_PORT', 5183),
  mailbox: portFrom('MAILBOX_PORT', 5184),
};

/** Everything that was started, in order; it ends the other way round. */
const children: Child[] = [];
let stopping = false;

async function main(): Promise<void> {
  mkdirSync('.data', { recursive: true });
  const other = runningStart();
  if (other) {
    process.stdout.write(
      `Tenderlight is running here already: ${other.address}\nStop it with Ctrl-C in its own window, then start again.\n`,
    );
    process.exit(1);
  }
  const address = process.env.PUBLIC_URL ?? `http://127.0.0.1:${ports.app}`;
  takeStart(address);
  process.on('SIGINT', () => void stop(0));
  process.on('SIGTERM', () => void stop(0));
  build();
  const env = await surroundings();
  await runToEnd('Migrating the database', process.execPath, ['dist/server/migrate.js'], env);
  if (env.STRIPE_MOCK_CONTROL_URL)
    await runToEnd('Making the demonstration', process.execPath, [...TSX, 'seeds/run.ts'], env);
  follow(startChild('The server', process.execPath, ['dist/server/main.js'], { env }));
  await ready(address);
  process.stdout.write(`\nTenderlight is ready: ${address}\n`);
  if (env.TENDERLIGHT_MODE !== 'production') {
    process.stdout.write(`\nSign in as one of the invented clinic's people, password ${PASSWORD}:\n`);
    for (const name of PEOPLE) process.stdout.write(`  ${name}@tenderlight.example\n`);
    process.stdout.write(
      `Mail the clinic sends: http://127.0.0.1:${ports.mailbox}\nCtrl-C stops everything.\n`,
    );
  }
}

/** The database and, unless the real services are configured, the stand-ins; what the server is to be told of them. */
async function surroundings(): Promise<Record<string, string>> {
  const env: Record<string, string> = {
    NODE_ENV: 'production',
    PORT: String(ports.app),
    SESSION_SECRET: process.env.SESSION_SECRET ?? keptSecret(),
    LOG_LEVEL: process.env.LOG_LEVEL ?? 'warn',
    TENDERLIGHT_MODE: process.env.TENDERLIGHT_MODE ?? 'demo',
    DEMO_PASSWORD: PASSWORD,
  };
  if (process.env.DATABASE_URL && process.env.DATABASE_OWNER_URL) {
    env.DATABASE_URL = process.env.DATABASE_URL;
    env.DATABASE_OWNER_URL = process.env.DATABASE_OWNER_URL;
  } else {
    const database = await startPrivateMariadb('.data/mariadb', ports.database);
    follow(database.child);
    env.DATABASE_URL = database.appUrl;
    env.DATABASE_OWNER_URL = database.ownerUrl;
  }
  if (!process.env.STRIPE_SECRET_KEY) Object.assign(env, await startStripe());
  if (!process.env.SMTP_URL) Object.assign(env, await startMailbox());
  return env;
}

async function startStripe(): Promise<Record<string, string>> {
  const child = startChild(
    'The payment stand-in',
    process.execPath,
    [...TSX, 'docker-free-scripts/stripe-mock/main.ts'],
    {
      quiet: true,
      env: {
        STRIPE_MOCK_PORT: String(ports.stripe),
        STRIPE_MOCK_CONTROL_PORT: String(ports.stripeControl),
        STRIPE_MOCK_DATA: '.data/stripe-mock',
        STRIPE_MOCK_WEBHOOK_URL: `http://127.0.0.1:${ports.app}/webhooks/stripe`,
      },
    },
  );
  follow(child);
  await readyLine(child);
  return {
    STRIPE_SECRET_KEY: 'sk_test_tenderlight_local',
    STRIPE_WEBHOOK_SECRET: 'whsec_tenderlight_local',
    STRIPE_API_HOST: '127.0.0.1',
    STRIPE_API_PORT: String(ports.stripe),
    STRIPE_API_PROTOCOL: 'http',
    STRIPE_MOCK_CONTROL_URL: `http://127.0.0.1:${ports.stripeControl}`,
  };
}

async function startMailbox(): Promise<Record<string, string>> {
  const child = startChild('The mailbox', process.execPath, [...TSX, 'docker-free-scripts/mailbox/main.ts'], {
    quiet: true,
    env: {
      MAILBOX_SMTP_PORT: String(ports.smtp),
      MAILBOX_PORT: String(ports.mailbox),
      MAILBOX_DATA: '.data/mailbox',
    },
  });
  follow(child);
  await readyLine(child);
  return { SMTP_URL: `smtp://127.0.0.1:${ports.smtp}` };
}

/** A child that ends by itself ends everything: half a clinic helps nobody. */
function follow(child: Child): void {
  children.push(child);
  child.process.once('exit', () => {
    if (stopping) return;
    process.stderr.write(
      `${child.name} ended by itself; everything is stopped. Start again with npm start.\n`,
    );
    void stop(1);
  });
}

async function ready(address: string): Promise<void> {
  const url = `http://127.0.0.1:${ports.app}/api/ready`;
  for (let tries = 0; tries < 300 && !stopping; tries += 1) {
    const answer = await fetch(url).catch(() => undefined);
    if (answer?.ok) return;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  if (!stopping) throw new Error(`The server does not answer at ${address}.`);
}

async function stop(status: number): Promise<void> {
  if (stopping) return;
  stopping = true;
  for (const child of [...children].reverse()) await endChild(child);
  letStartGo();
  process.exit(status);
}

function keptSecret(): string {
  const file = '.data/session-secret';
  if (!existsSync(file)) writeFileSync(file, randomBytes(32).toString('hex'), { mode: 0o600 });
  return readFileSync(file, 'utf8');
}

function portFrom(name: string, otherwise: number): number {
  const port = Number(process.env[name] ?? otherwise);
  return Number.isInteger(port) && port > 0 && port < 65_536 ? port : otherwise;
}

main().catch((error: unknown) => {
  if (stopping) return;
  process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
  void stop(1);
});
