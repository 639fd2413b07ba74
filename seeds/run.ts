import { dayOf, instantOfMs } from '#domain/time/index';
import { type AppDeps, subscribeAll } from '#server/app';
import { smtpGateway, stripeGateway } from '#server/gateways/index';
import { steppedClock, systemClock } from '#server/platform/clock';
import { DEMO_PASSWORD, readConfig } from '#server/platform/config';
import { openDatabase, rawRows, sqlInstant } from '#server/platform/db';
import { createFacts } from '#server/platform/facts';
import { createLog } from '#server/platform/log';
import { migrateLatest } from '#server/platform/migrate';
import { createControlClient } from '#stand-ins/stripe-mock/control-client';
import { ZONE } from './clinic.ts';
import { anchorFor, seedDemo } from './demo.ts';

const MARKER = 'demo';

/**
 * Command: seeds an empty database with the demonstration; a complete one is left alone, a half-made one is made anew.
 * Needs DATABASE_OWNER_URL, the server's own environment and STRIPE_MOCK_CONTROL_URL.
 */
async function main(): Promise<void> {
  const ownerUrl = process.env.DATABASE_OWNER_URL;
  const controlUrl = process.env.STRIPE_MOCK_CONTROL_URL;
  if (!ownerUrl || !controlUrl)
    throw new Error('Seeding needs DATABASE_OWNER_URL and STRIPE_MOCK_CONTROL_URL.');
  const config = readConfig(process.env);
  if (await isComplete(ownerUrl)) return;
  await startOver(ownerUrl, config.databaseUrl);
  const control = createControlClient(controlUrl);
  const now = instantOfMs(Math.floor(Date.now() / 1000) * 1000);
  const anchor = anchorFor(dayOf(now, ZONE));
  const deps: AppDeps & { clock: ReturnType<typeof steppedClock> } = {
    db: openDatabase(config.databaseUrl, { min: 0, max: 4 }),
    log: createLog('warn'),
    config,
    clock: steppedClock(now),
    facts: createFacts(),
    gateways: { mail: smtpGateway(config.smtpUrl, config.mailFrom), stripe: stripeGateway(config.stripe) },
  };
  subscribeAll(deps);
  try {
    const processor = {
      setClock: async (at: string) => {
        await control.setClock(at, { frozen: true });
      },
      pay: async (sessionId: string) => {
        await control.pay(sessionId);
      },
    };
    await seedDemo(deps, processor, { anchor, now, password: process.env.DEMO_PASSWORD || DEMO_PASSWORD });
    await complete(ownerUrl, anchor);
  } finally {
    await control.resetClock();
    await deps.db.destroy();
  }
}

async function isComplete(ownerUrl: string): Promise<boolean> {
  const owner = openDatabase(ownerUrl, { min: 0, max: 1 });
  try {
    const rows = await rawRows<{ name: string }>(owner, 'SELECT name FROM seed_markers WHERE name = ?', [
      MARKER,
    ]);
    const [clinics] = await rawRows<{ n: number }>(owner, 'SELECT COUNT(*) AS n FROM clinics');
    const [people] = await rawRows<{ n: number }>(
      owner,
      "SELECT COUNT(*) AS n FROM users WHERE email NOT LIKE '%@tenderlight.example'",
    );
    // A clinic that was set up by hand is nobody's half-made demonstration.
    return rows.length > 0 || ((clinics?.n ?? 0) > 0 && (people?.n ?? 0) > 0);
  } finally {
    await owner.destroy();
  }
}

/** Empties what an interrupted seeding left and raises the schema again. */
async function startOver(ownerUrl: string, appUrl: string): Promise<void> {
  const owner = openDatabase(ownerUrl, { min: 0, max: 1 });
  try {
    const [clinics] = await rawRows<{ n: number }>(owner, 'SELECT COUNT(*) AS n FROM clinics');
    if ((clinics?.n ?? 0) === 0) return;
    const tables = await rawRows<{ table_name: string }>(
      owner,
      "SELECT table_name AS table_name FROM information_schema.tables WHERE table_schema = DATABASE() AND table_type = 'BASE TABLE'",
    );
    await owner.raw(
      `SET STATEMENT foreign_key_checks = 0 FOR DROP TABLE ${tables.map((row) => `\`${row.table_name}\``).join(', ')}`,
    );
  } finally {
    await owner.destroy();
  }
  const app = new URL(appUrl);
  await migrateLatest(ownerUrl, { user: decodeURIComponent(app.username), host: app.hostname });
}

async function complete(ownerUrl: string, anchor: string): Promise<void> {
  const owner = openDatabase(ownerUrl, { min: 0, max: 1 });
  try {
    await owner('seed_markers').insert({
      name: MARKER,
      anchor_on: anchor,
      completed_at: sqlInstant(systemClock.now()),
    });
  } finally {
    await owner.destroy();
  }
}

try {
  await main();
} catch (error) {
  process.stderr.write(
    `The demonstration could not be made: ${error instanceof Error ? (error.stack ?? error.message) : String(error)}\n`,
  );
  process.exit(1);
}
