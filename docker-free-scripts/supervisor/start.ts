import { existsSync, rmSync, writeFileSync } from 'node:fs';
import { build, CLIENT, SERVER } from './build.ts';
import { hasEnded, readyLine } from './children.ts';
import { Household } from './household.ts';
import {
  answers,
  instanceIn,
  prepare,
  runningPid,
  serverCommand,
  untilAnswering,
  untilEnded,
} from './mariadb-instance.ts';
import { type DatabaseUrls, ownDatabase } from './own-database.ts';
import { needFreePorts } from './ports.ts';
import {
  checkServerSettings,
  DATABASE_FOLDER,
  DATABASE_PORT,
  readSettings,
  type Settings,
} from './settings.ts';

const TSX = ['--conditions=source', '--import', 'tsx'];
const PEOPLE = ['counsellor', 'desk', 'desk2', 'surgeon', 'surgeon2', 'manager', 'manager2', 'auditor'];
/** What a second start tells its person. */
const ADDRESS_FILE = '.data/address';

const household = new Household((name) => {
  complain(`${name} ended by itself, so everything is stopped. Start again with npm start.`);
  void stop(1);
});
let stopping = false;

async function main(): Promise<void> {
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => void stop(0));
  if (existsSync('.env')) process.loadEnvFile('.env');
  const settings = readSettings(process.env);
  checkServerSettings(settings, process.env);
  writeFileSync(ADDRESS_FILE, settings.address);
  await needFreePorts(settings.wanted);
  await build(household, SERVER, CLIENT);
  const database = settings.suppliedDatabase ?? (await privateDatabase(settings));
  const env = { ...settings.server, DATABASE_URL: database.app, DATABASE_OWNER_URL: database.owner };
  if (settings.stripeStandIn) await startStripe(settings);
  if (settings.mailbox) await startMailbox(settings);
  await household.run('Migrating the database', process.execPath, ['dist/server/migrate.js'], env);
  if (settings.stripeStandIn)
    await household.run('Making the demonstration', process.execPath, [...TSX, 'seeds/run.ts'], env);
  await startServer(settings, database);
  welcome(settings);
}

/** The private MariaDB: one that runs already is used and left running, else it is started and ends with us. */
async function privateDatabase(settings: Settings): Promise<DatabaseUrls> {
  const instance = instanceIn(DATABASE_FOLDER);
  if (runningPid(instance) !== undefined && !answers(instance)) await untilEnded(instance);
  if (runningPid(instance) === undefined) {
    await needFreePorts([{ variable: DATABASE_PORT.variable, port: settings.ports.database }]);
    prepare(instance, settings.ports.database);
    const [program, ...args] = serverCommand(instance);
    const server = household.start('MariaDB', program, args, { log: instance.log });
    await untilAnswering(instance, () => hasEnded(server));
  }
  return ownDatabase(instance);
}

async function startStripe({ ports }: Settings): Promise<void> {
  const env = {
    STRIPE_MOCK_PORT: String(ports.stripe),
    STRIPE_MOCK_CONTROL_PORT: String(ports.stripeControl),
    STRIPE_MOCK_DATA: '.data/stripe-mock',
    STRIPE_MOCK_WEBHOOK_URL: `http://127.0.0.1:${ports.app}/webhooks/stripe`,
  };
  const program = [...TSX, 'docker-free-scripts/stripe-mock/main.ts'];
  await readyLine(household.start('The payment stand-in', process.execPath, program, { quiet: true, env }));
}

async function startMailbox({ ports }: Settings): Promise<void> {
  const env = {
    MAILBOX_SMTP_PORT: String(ports.smtp),
    MAILBOX_PORT: String(ports.mailbox),
    MAILBOX_DATA: '.data/mailbox',
  };
  const program = [...TSX, 'docker-free-scripts/mailbox/main.ts'];
  await readyLine(household.start('The mailbox', process.execPath, program, { quiet: true, env }));
}

const PATIENCE_MS = 60_000;

/** Starts the server, which is not told the owner's password, and waits until it is ready. */
async function startServer(settings: Settings, database: DatabaseUrls): Promise<void> {
  const env = { ...settings.server, DATABASE_URL: database.app, DATABASE_OWNER_URL: '' };
  household.start('The server', process.execPath, ['dist/server/main.js'], { env });
  const until = Date.now() + PATIENCE_MS;
  while (!stopping && !(await isReady(settings.readyUrl))) {
    if (Date.now() > until) throw new Error(`The server does not say it is ready at ${settings.readyUrl}.`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

async function isReady(url: string): Promise<boolean> {
  try {
    // A connection kept open would hold up the server's stop.
    const answer = await fetch(url, { headers: { connection: 'close' } });
    await answer.arrayBuffer();
    return answer.ok;
  } catch {
    return false;
  }
}

function welcome(settings: Settings): void {
  if (stopping) return;
  const lines = ['', `Tenderlight is ready: ${settings.address}`];
  if (settings.demo) {
    lines.push('', `Sign in as one of the invented clinic's people, password ${settings.password}:`);
    lines.push(...PEOPLE.map((name) => `  ${name}@tenderlight.example`));
  }
  if (settings.mailbox) lines.push(`Mail the clinic sends: http://127.0.0.1:${settings.ports.mailbox}`);
  process.stdout.write(`${lines.join('\n')}\nCtrl-C stops everything.\n`);
}

async function stop(status: number): Promise<void> {
  if (stopping) return;
  stopping = true;
  await household.end();
  rmSync(ADDRESS_FILE, { force: true });
  process.exit(status);
}

function complain(sentence: string): void {
  process.stderr.write(`${sentence}\n`);
}

main().catch((error: unknown) => {
  if (stopping) return;
  complain(error instanceof Error ? error.message : String(error));
  void stop(1);
});
