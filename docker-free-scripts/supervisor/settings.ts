import { randomBytes } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import {
  DEMO_PASSWORD,
  readConfig,
  STAND_IN_STRIPE_KEY,
  STAND_IN_WEBHOOK_SECRET,
} from '#server/platform/config';
import type { DatabaseUrls } from './own-database.ts';
import { portFrom, type WantedPort } from './ports.ts';

export const DATABASE_FOLDER = '.data/mariadb';
export const DATABASE_PORT = { variable: 'TENDERLIGHT_DB_PORT', usual: 33_180 } as const;

/** What a start is to bring up, read from the environment before anything is started. */
export interface Settings {
  readonly demo: boolean;
  /** Where people reach the application. */
  readonly address: string;
  /** Where the supervisor asks whether the server is ready. */
  readonly readyUrl: string;
  readonly password: string;
  readonly ports: Readonly<
    Record<'app' | 'database' | 'stripe' | 'stripeControl' | 'smtp' | 'mailbox', number>
  >;
  /** The ports that must be free, the database's apart. */
  readonly wanted: readonly WantedPort[];
  /** A database given by two addresses; otherwise a private one is started. */
  readonly suppliedDatabase: DatabaseUrls | undefined;
  readonly stripeStandIn: boolean;
  readonly mailbox: boolean;
  /** The server's environment, its database and its stand-ins' addresses apart. */
  readonly server: Readonly<Record<string, string>>;
}

/** Reads and checks the environment. Throws with a sentence. */
export function readSettings(env: NodeJS.ProcessEnv): Settings {
  const demo = (env.TENDERLIGHT_MODE || 'demo') === 'demo';
  const ports = readPorts(env);
  const host = env.HOST || '127.0.0.1';
  const near = ['0.0.0.0', '::'].includes(host) ? '127.0.0.1' : host;
  const told = {
    demo,
    address: env.PUBLIC_URL || `http://${near}:${ports.app}`,
    password: env.DEMO_PASSWORD || DEMO_PASSWORD,
    ports,
    stripeStandIn: demo && !env.STRIPE_SECRET_KEY,
    mailbox: demo && !env.SMTP_URL,
  };
  return {
    ...told,
    readyUrl: `http://${near}:${ports.app}/api/ready`,
    suppliedDatabase: suppliedDatabase(env),
    wanted: wantedPorts(told, host),
    server: serverEnvironment(told, env),
  };
}

type Told = Pick<Settings, 'demo' | 'address' | 'password' | 'ports' | 'stripeStandIn' | 'mailbox'>;

function readPorts(env: NodeJS.ProcessEnv): Settings['ports'] {
  return {
    app: portFrom(env, 'PORT', 5180),
    database: portFrom(env, DATABASE_PORT.variable, DATABASE_PORT.usual),
    stripe: portFrom(env, 'STRIPE_MOCK_PORT', 5181),
    stripeControl: portFrom(env, 'STRIPE_MOCK_CONTROL_PORT', 5182),
    smtp: portFrom(env, 'MAILBOX_SMTP_PORT', 5183),
    mailbox: portFrom(env, 'MAILBOX_PORT', 5184),
  };
}

function wantedPorts({ ports, stripeStandIn, mailbox }: Told, host: string): WantedPort[] {
  const app = [{ variable: 'PORT', port: ports.app, host }];
  const stripe = [
    { variable: 'STRIPE_MOCK_PORT', port: ports.stripe },
    { variable: 'STRIPE_MOCK_CONTROL_PORT', port: ports.stripeControl },
  ];
  const mail = [
    { variable: 'MAILBOX_SMTP_PORT', port: ports.smtp },
    { variable: 'MAILBOX_PORT', port: ports.mailbox },
  ];
  return [...app, ...(stripeStandIn ? stripe : []), ...(mailbox ? mail : [])];
}

function serverEnvironment(told: Told, env: NodeJS.ProcessEnv): Record<string, string> {
  const stripe = {
    STRIPE_SECRET_KEY: STAND_IN_STRIPE_KEY,
    STRIPE_WEBHOOK_SECRET: STAND_IN_WEBHOOK_SECRET,
    STRIPE_API_HOST: '127.0.0.1',
    STRIPE_API_PORT: String(told.ports.stripe),
    STRIPE_API_PROTOCOL: 'http',
    STRIPE_MOCK_CONTROL_URL: `http://127.0.0.1:${told.ports.stripeControl}`,
  };
  return {
    NODE_ENV: 'production',
    TENDERLIGHT_MODE: env.TENDERLIGHT_MODE || 'demo',
    PORT: String(told.ports.app),
    PUBLIC_URL: told.address,
    LOG_LEVEL: env.LOG_LEVEL || 'warn',
    SESSION_SECRET: env.SESSION_SECRET || keptSecret(),
    ...(told.demo ? { DEMO_PASSWORD: told.password } : {}),
    ...(told.stripeStandIn ? stripe : {}),
    ...(told.mailbox ? { SMTP_URL: `smtp://127.0.0.1:${told.ports.smtp}` } : {}),
  };
}

/** Throws what the server itself would object to, before anything is started for it. */
export function checkServerSettings(settings: Settings, env: NodeJS.ProcessEnv): void {
  const placeholder = `mysql://tl_app@127.0.0.1:${settings.ports.database}/tenderlight`;
  readConfig({ ...env, DATABASE_URL: settings.suppliedDatabase?.app ?? placeholder, ...settings.server });
}

function suppliedDatabase(env: NodeJS.ProcessEnv): DatabaseUrls | undefined {
  const { DATABASE_URL: app, DATABASE_OWNER_URL: owner } = env;
  if (app && owner) return { app, owner };
  if (app || owner)
    throw new Error(
      'A database of your own needs both DATABASE_URL (the application) and DATABASE_OWNER_URL (who migrates); give both, or neither for a private MariaDB.',
    );
  return undefined;
}

/** The secret of the sessions, made once. */
function keptSecret(): string {
  const file = '.data/session-secret';
  if (!existsSync(file)) writeFileSync(file, randomBytes(32).toString('hex'), { mode: 0o600 });
  return readFileSync(file, 'utf8');
}
