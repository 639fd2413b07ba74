import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { appendFileSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { createControlClient } from '#stand-ins/stripe-mock/control-client';
import { type RunningStripeMock, startStripeMock } from '#stand-ins/stripe-mock/start-stripe-mock';
import {
  DAY_MS,
  errorOf,
  openSession,
  openTestBed,
  payNewSession,
  START,
  sdkFor,
  sessionParameters,
} from './test-bed.ts';

const ROOT = fileURLToPath(new URL('../../..', import.meta.url));
const CARD = '4242424242424242';

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'payment-stand-in-'));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

describe('A restart', () => {
  test('all state · is as it was: objects, keys, clock, tasks and undelivered events', async () => {
    const bed = await openTestBed({ dataFolder: folder });
    const key = { idempotencyKey: 'attempt-1' };
    const open = await openSession(bed, {}, key);
    const { charge, session } = await payNewSession(bed, CARD);
    await bed.control.addEventFault({ kind: 'hold', eventType: 'refund.created' });
    const refund = await bed.stripe.refunds.create({ charge: charge.id, amount: 1_000 });
    await bed.control.idle();
    const { state: before } = await bed.control.dump();
    await bed.close();

    const mock = await startStripeMock({ dataFolder: folder });
    const control = createControlClient(mock.controlUrl);
    const stripe = sdkFor(mock);
    const { state, problems, clock } = await control.dump();
    expect({ ...state, requests: [] }).toEqual({ ...before, requests: [] });
    expect([problems, clock]).toEqual([[], { now: START, frozen: true }]);
    expect((await stripe.checkout.sessions.retrieve(session.id)).payment_status).toBe('paid');
    const repeated = await stripe.checkout.sessions.create(sessionParameters(), key);
    expect(repeated.id).toBe(open.id);
    await control.setWebhook({ url: null });
    await control.advanceClock(3 * DAY_MS);
    expect((await stripe.payouts.list()).data).toHaveLength(1);
    expect((await stripe.refunds.retrieve(refund.id)).status).toBe('succeeded');
    expect((await control.dump()).problems).toEqual([]);
    await mock.stop();
  });

  test('new objects after it · get places of their own in the order', async () => {
    const first = await startStripeMock({ dataFolder: folder });
    const old = await sdkFor(first).checkout.sessions.create(sessionParameters());
    await first.stop();
    const second = await startStripeMock({ dataFolder: folder });
    const stripe = sdkFor(second);
    const young = await stripe.checkout.sessions.create(sessionParameters());
    expect((await stripe.checkout.sessions.list()).data.map(({ id }) => id)).toEqual([young.id, old.id]);
    await second.stop();
  });

  test('no folder · nothing is kept', async () => {
    const first = await startStripeMock();
    const { id } = await sdkFor(first).checkout.sessions.create(sessionParameters());
    await first.stop();
    const second = await startStripeMock();
    expect((await errorOf(sdkFor(second).checkout.sessions.retrieve(id))).statusCode).toBe(404);
    await second.stop();
  });
});

describe('The file of the state', () => {
  const logOf = () => join(folder, readdirSync(folder)[0] ?? '');

  test('a half-written last line · is dropped, the rest stands', async () => {
    const first = await startStripeMock({ dataFolder: folder });
    const { id } = await sdkFor(first).checkout.sessions.create(sessionParameters());
    await first.stop();
    appendFileSync(logOf(), '[{"kind":"sessions","id":"cs_te');
    const second = await startStripeMock({ dataFolder: folder });
    expect((await sdkFor(second).checkout.sessions.retrieve(id)).status).toBe('open');
    await second.stop();
  });

  test('a damaged earlier line · stops the start with a sentence', async () => {
    const first = await startStripeMock({ dataFolder: folder });
    await first.stop();
    writeFileSync(logOf(), `{broken\n${readFileSync(logOf(), 'utf8')}`);
    await expect(startStripeMock({ dataFolder: folder })).rejects.toThrow(/line 1 is not readable/);
  });
});

describe('As a process of its own', () => {
  const children: ChildProcess[] = [];
  afterEach(() => {
    for (const child of children.splice(0)) child.kill('SIGKILL');
  });
  const start = async (more: NodeJS.ProcessEnv = {}) => {
    const child = spawn(
      process.execPath,
      ['--conditions=source', '--import', 'tsx', 'docker-free-scripts/stripe-mock/main.ts'],
      {
        cwd: ROOT,
        env: { ...process.env, STRIPE_MOCK_DATA: folder, ...more },
        stdio: ['ignore', 'pipe', 'pipe'],
      },
    );
    children.push(child);
    const ended = once(child, 'exit') as Promise<[number | null, NodeJS.Signals | null]>;
    const firstLine = once(createInterface(child.stdout), 'line') as Promise<[string]>;
    return { child, ended, firstLine };
  };
  const addresses = async (firstLine: Promise<[string]>): Promise<RunningStripeMock> => {
    const [line] = await firstLine;
    const { ready, api, control } = JSON.parse(line) as { ready: boolean; api: string; control: string };
    expect(ready).toBe(true);
    return { apiUrl: api, controlUrl: control, stop: () => Promise.resolve() };
  };

  test('killed without warning · has lost nothing it answered for; SIGTERM · ends with 0', async () => {
    const first = await start();
    const mock = await addresses(first.firstLine);
    const { id } = await sdkFor(mock).checkout.sessions.create(sessionParameters());
    expect((await createControlClient(mock.controlUrl).pay(id)).outcome).toBe('paid');
    first.child.kill('SIGKILL');
    await first.ended;

    const second = await start();
    const again = await addresses(second.firstLine);
    expect((await sdkFor(again).checkout.sessions.retrieve(id)).payment_status).toBe('paid');
    expect((await createControlClient(again.controlUrl).dump()).problems).toEqual([]);
    second.child.kill('SIGTERM');
    expect(await second.ended).toEqual([0, null]);
  });

  test('a setting that cannot be used · one sentence naming it, and no start', async () => {
    const { child, ended } = await start({ STRIPE_MOCK_PORT: 'eighty' });
    const complaint: Buffer[] = [];
    child.stderr.on('data', (chunk: Buffer) => complaint.push(chunk));
    expect(await ended).toEqual([1, null]);
    expect(Buffer.concat(complaint).toString()).toBe(
      'The payment stand-in cannot start: STRIPE_MOCK_PORT: not a port\n',
    );
  });
});
