import { type ChildProcess, execFileSync, spawn } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir, userInfo } from 'node:os';
import path from 'node:path';

/** A MariaDB of one test run. */
export interface TestServer {
  readonly port: number;
  readonly socket: string;
  stop(): Promise<void>;
}

/** A port nobody listens on just now. */
export function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() =>
        address !== null && typeof address === 'object'
          ? resolve(address.port)
          : reject(new Error('No port')),
      );
    });
  });
}

/** Starts a private MariaDB in a temporary folder; the folder goes with it. */
export async function startTestMariadb(): Promise<TestServer> {
  const folder = mkdtempSync(path.join(tmpdir(), 'tl-db-'));
  const user = userInfo().username;
  const data = path.join(folder, 'data');
  const socket = path.join(folder, 's.sock');
  const port = await freePort();
  const auth = ['--auth-root-authentication-method=socket', `--auth-root-socket-user=${user}`];
  execFileSync(
    'mariadb-install-db',
    [
      '--no-defaults',
      `--datadir=${data}`,
      `--user=${user}`,
      ...auth,
      '--skip-test-db',
      '--skip-name-resolve',
    ],
    {
      stdio: 'ignore',
    },
  );
  const config = path.join(folder, 'my.cnf');
  writeFileSync(config, settings({ data, socket, port }));
  const server = spawn('/usr/sbin/mariadbd', [`--defaults-file=${config}`, `--user=${user}`], {
    stdio: ['ignore', 'ignore', 'pipe'],
  });
  await answering(server, socket);
  return {
    port,
    socket,
    async stop() {
      const ended = new Promise((resolve) => server.once('exit', resolve));
      server.kill('SIGTERM');
      await ended;
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

function settings({ data, socket, port }: { data: string; socket: string; port: number }): string {
  return [
    '[mysqld]',
    `datadir=${data}`,
    `socket=${socket}`,
    `port=${port}`,
    `pid-file=${path.join(data, 'pid')}`,
    'bind-address=127.0.0.1',
    'skip-name-resolve',
    'character-set-server=utf8mb4',
    'default-time-zone=+00:00',
    'transaction-isolation=READ-COMMITTED',
    'local-infile=0',
    'sql_mode=STRICT_ALL_TABLES,ONLY_FULL_GROUP_BY,NO_ZERO_DATE,NO_ZERO_IN_DATE',
    'max_connections=300',
    '',
  ].join('\n');
}

async function answering(server: ChildProcess, socket: string): Promise<void> {
  let complaint = '';
  server.stderr?.on('data', (chunk: Buffer) => {
    complaint = (complaint + chunk.toString()).slice(-2_000);
  });
  for (let tries = 0; tries < 150; tries += 1) {
    if (server.exitCode !== null) throw new Error(`MariaDB did not start: ${complaint}`);
    try {
      execFileSync('mariadb', ['--no-defaults', '-S', socket, '-e', 'SELECT 1'], { stdio: 'ignore' });
      return;
    } catch {
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }
  throw new Error(`MariaDB does not answer: ${complaint}`);
}
