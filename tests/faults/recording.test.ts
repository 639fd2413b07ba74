import { type ChildProcess, spawn } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { computeProof } from '#server/features/proof/index';
import { systemClock } from '#server/platform/clock';
import { rawRows } from '#server/platform/db';
import {
  acceptByLink,
  type ChainHouse,
  courseOfQuote,
  issueQuoteByHttp,
  makeChainHouse,
  openDeposit,
} from '#tests/factories/chain';
import { freePort } from '#tests/support/mariadb';
import { type TestApp, testApp } from '#tests/support/test-app';
import { freshDatabase, type TestDatabase } from '#tests/support/test-database';
import { type TestStripe, testStripe } from '#tests/support/test-stripe';

const ROOT = fileURLToPath(new URL('../..', import.meta.url));

let database: TestDatabase;
let stripe: TestStripe;
/** Makes the quotes and looks at the rows; its workers never run, so that only the server under test records. */
let app: TestApp;
let house: ChainHouse;
let port: number;
let server: ChildProcess | undefined;

beforeAll(async () => {
  database = await freshDatabase('faults');
  stripe = await testStripe();
  app = await testApp({ database, stripeUrl: stripe.apiUrl });
  house = await makeChainHouse(app);
  port = await freePort();
  await stripe.control.setWebhook({
    url: `http://127.0.0.1:${port}/webhooks/stripe`,
    secret: 'whsec_tenderlight_local',
  });
});
afterAll(async () => {
  if (server) await kill();
  await app.stop();
  await stripe.stop();
});

/** The real server process, workers and all. */
async function start(): Promise<void> {
  const api = new URL(stripe.apiUrl);
  server = spawn(process.execPath, ['--conditions=source', '--import', 'tsx', 'server/main.ts'], {
    cwd: ROOT,
    stdio: ['ignore', 'ignore', 'inherit'],
    env: {
      ...process.env,
      NODE_ENV: 'test',
      PORT: String(port),
      DATABASE_URL: database.appUrl,
      SESSION_SECRET: 'a secret of tests, long enough to pass',
      STRIPE_SECRET_KEY: 'sk_test_tenderlight_local',
      STRIPE_WEBHOOK_SECRET: 'whsec_tenderlight_local',
      STRIPE_API_HOST: api.hostname,
      STRIPE_API_PORT: api.port,
      STRIPE_API_PROTOCOL: 'http',
      SMTP_URL: 'smtp://127.0.0.1:9',
      LOG_LEVEL: 'silent',
    },
  });
  await until(
    async () => (await fetch(`http://127.0.0.1:${port}/api/ready`).catch(() => undefined))?.ok === true,
  );
}

async function kill(): Promise<void> {
  const running = server;
  server = undefined;
  if (!running || running.exitCode !== null) return;
  const ended = new Promise((resolve) => running.once('exit', resolve));
  running.kill('SIGKILL');
  await ended;
}

async function until(holds: () => Promise<boolean>, withinMs = 60_000): Promise<void> {
  for (const end = Date.now() + withinMs; Date.now() < end; ) {
    if (await holds()) return;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  throw new Error('It did not come to hold');
}

async function openCheckout() {
  const quote = await issueQuoteByHttp(app, house);
  const checkout = await openDeposit(await acceptByLink(app, quote));
  return {
    courseId: await courseOfQuote(app, quote.quoteId),
    sessionId: /cs_[A-Za-z0-9_]+/.exec(checkout.url ?? '')?.[0] ?? '',
  };
}

async function receiptsOf(courseId: number): Promise<number> {
  const [row] = await rawRows<{ n: number }>(
    app.deps.db,
    'SELECT COUNT(*) AS n FROM receipts WHERE course_id = ?',
    [courseId],
  );
  return row?.n ?? 0;
}

async function everythingTies(): Promise<void> {
  const proof = await computeProof({ db: app.deps.db, clock: systemClock }, undefined);
  expect(proof.controls.filter((control) => !control.tied)).toEqual([]);
}

describe('kill -9 of the server', () => {
  test('between the payment and its webhook · the receipt is recorded once after the restart', async () => {
    await start();
    const { courseId, sessionId } = await openCheckout();
    await kill();
    await stripe.control.set({ redirect: 'before_webhook' });
    await stripe.control.pay(sessionId);
    expect(await receiptsOf(courseId)).toBe(0);
    await start();
    await stripe.control.retryDeliveries();
    await until(async () => (await receiptsOf(courseId)) === 1);
    await stripe.control.retryDeliveries();
    await stripe.control.idle();
    expect(await receiptsOf(courseId)).toBe(1);
    await everythingTies();
    await kill();
  });

  test('between the webhook and its recording · the receipt is recorded once after the restart', async () => {
    await start();
    const { courseId, sessionId } = await openCheckout();
    // The course is held, so the worker that has taken up the event waits inside its transaction.
    const hold = await app.deps.db.transaction();
    await rawRows(hold, 'SELECT course_id FROM courses WHERE course_id = ? FOR UPDATE', [courseId]);
    await stripe.control.pay(sessionId);
    await until(
      async () =>
        (
          await rawRows(
            app.deps.db,
            "SELECT 1 FROM stripe_events WHERE object_id = ? AND tries > 0 AND state = 'waiting'",
            [sessionId],
          )
        ).length > 0,
    );
    await kill();
    await hold.rollback();
    expect(await receiptsOf(courseId)).toBe(0);
    await app.deps
      .db('stripe_events')
      .where({ state: 'waiting' })
      .update({ next_try_at: '2020-01-01 00:00:00' });
    await start();
    await until(async () => (await receiptsOf(courseId)) === 1);
    await everythingTies();
    await kill();
  });
});
