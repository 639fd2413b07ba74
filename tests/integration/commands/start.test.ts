import { type ChildProcess, spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { once } from 'node:events';
import { mkdirSync, readdirSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { signIn } from '#contract/session';
import { build, CLIENT, SERVER } from '#stand-ins/supervisor/build';
import { Household } from '#stand-ins/supervisor/household';
import { asRoot, instanceIn, runningPid } from '#stand-ins/supervisor/mariadb-instance';
import { Agent } from '#tests/support/agent';
import { freePort } from '#tests/support/mariadb';
import { makeScratchFolder } from '#tests/support/scratch-folder';

const ROOT = fileURLToPath(new URL('../../..', import.meta.url));
/** What a start reads besides its packages. */
const TREE = [
  ...['client', 'dist', 'docker-free-scripts', 'migrations', 'package.json', 'package-lock.json'],
  ...['seeds', 'server', 'tsconfig.build.json', 'tsconfig.json', 'vite.config.ts'],
];
/** Where the set-up notes which lock is installed. */
const INSTALLED = '.tenderlight-lock';
const PATIENCE_MS = 300_000;

interface Start {
  readonly supervisor: ChildProcess;
  /** Everything it printed so far. */
  output(): string;
  /** Asks it to end, as Ctrl-C does, and answers its exit status. */
  stop(signal: NodeJS.Signals): Promise<number | null>;
}

describe('npm start on an empty data folder', () => {
  const folder = makeScratchFolder();
  const ports: Record<string, string> = {};
  let start: Start;

  beforeAll(async () => {
    linkTree(folder);
    for (const name of ['PORT', 'TENDERLIGHT_DB_PORT', 'STRIPE_MOCK_PORT', 'STRIPE_MOCK_CONTROL_PORT'])
      ports[name] = String(await freePort());
    for (const name of ['MAILBOX_SMTP_PORT', 'MAILBOX_PORT']) ports[name] = String(await freePort());
    const household = new Household(() => undefined);
    await build(household, SERVER, CLIENT);
    await household.end();
    start = await startHere();
  }, PATIENCE_MS);
  afterAll(async () => {
    await start?.stop('SIGTERM');
    rmSync(folder, { recursive: true, force: true, maxRetries: 5 });
  });

  async function startHere(): Promise<Start> {
    let text = '';
    const supervisor = spawn('sh', ['docker-free-scripts/start.sh'], {
      cwd: folder,
      stdio: ['ignore', 'pipe', 'pipe'],
      env: { PATH: process.env.PATH, HOME: process.env.HOME, ...ports },
    });
    const exited = once(supervisor, 'exit');
    const ready = new Promise<void>((resolve, reject) => {
      const hear = (chunk: Buffer): void => {
        text += chunk.toString();
        if (text.includes('Ctrl-C stops everything.')) resolve();
      };
      supervisor.stdout.on('data', hear);
      supervisor.stderr.on('data', hear);
      exited.then(
        () => reject(new Error(`It ended:\n${text}`)),
        () => undefined,
      );
    });
    await ready;
    return {
      supervisor,
      output: () => text,
      async stop(signal) {
        supervisor.kill(signal);
        return (await exited)[0] as number | null;
      },
    };
  }

  const address = (): string => `http://127.0.0.1:${ports.PORT}`;
  const database = instanceIn(path.join(folder, '.data/mariadb'));

  test('ready · prints the address once, and everybody it names can sign in', async () => {
    expect(
      start
        .output()
        .split('\n')
        .filter((line) => line.includes(address())),
    ).toEqual([`Tenderlight is ready: ${address()}`]);
    expect((await fetch(`${address()}/api/ready`)).status).toBe(200);
    const password = /password (\S+):/.exec(start.output())?.[1] ?? '';
    const people = start.output().match(/\S+@tenderlight\.example/g) ?? [];
    expect(people.length).toBe(8);
    for (const email of people) await new Agent(address()).call(signIn, { body: { email, password } });
  });

  test('a second start beside it · is refused with the address', async () => {
    await expect(startHere()).rejects.toThrow(`running from this folder already: ${address()}`);
    expect((await fetch(`${address()}/api/ready`)).status).toBe(200);
  });

  test(
    'Ctrl-C · ends everything; another start finds the same data',
    async () => {
      const receipts = (): string => asRoot(database, 'SELECT number FROM tenderlight.receipts ORDER BY 1');
      const before = receipts();
      const children = childrenOf(start.supervisor);
      expect(children.length).toBeGreaterThanOrEqual(4);
      expect(await start.stop('SIGINT')).toBe(0);
      expect(children.filter((pid) => isRunning(pid))).toEqual([]);
      expect(runningPid(database)).toBeUndefined();
      start = await startHere();
      expect(before).not.toBe('');
      expect(receipts()).toBe(before);
    },
    PATIENCE_MS,
  );
});

/** The project's tree with a data folder of its own and its packages as they stand, taken for installed. */
function linkTree(folder: string): void {
  for (const name of TREE) symlinkSync(path.join(ROOT, name), path.join(folder, name));
  const packages = path.join(folder, 'node_modules');
  mkdirSync(packages);
  for (const name of readdirSync(path.join(ROOT, 'node_modules')))
    if (name !== INSTALLED) symlinkSync(path.join(ROOT, 'node_modules', name), path.join(packages, name));
  const lock = readFileSync(path.join(ROOT, 'package-lock.json'));
  writeFileSync(path.join(packages, INSTALLED), createHash('sha256').update(lock).digest('hex'));
}

/** Process ids of what the supervisor started, from the kernel. */
function childrenOf({ pid }: ChildProcess): number[] {
  return readFileSync(`/proc/${pid}/task/${pid}/children`, 'utf8').trim().split(' ').map(Number);
}

function isRunning(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch {
    return false;
  }
}
