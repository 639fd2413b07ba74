import { execFileSync } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir, userInfo } from 'node:os';
import path from 'node:path';
import { type Child, startChild } from './children.ts';

export interface PrivateMariadb {
  readonly child: Child;
  readonly ownerUrl: string;
  readonly appUrl: string;
}

const NAME = 'tenderlight';
/** A Unix socket's path has at most 107 characters. */
const SOCKET_LIMIT = 100;

/** Starts the private MariaDB below a folder, making it on the first start: loopback, durable, owner and application apart. */
export async function startPrivateMariadb(folder: string, port: number): Promise<PrivateMariadb> {
  const data = path.resolve(folder, 'data');
  mkdirSync(folder, { recursive: true });
  const user = userInfo().username;
  if (!existsSync(path.join(data, 'mysql'))) {
    rmSync(data, { recursive: true, force: true });
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
      { stdio: 'ignore' },
    );
  }
  const socket = socketPath(folder);
  const config = path.join(folder, 'my.cnf');
  writeFileSync(config, settings(data, socket, port));
  const child = startChild('MariaDB', '/usr/sbin/mariadbd', [`--defaults-file=${config}`, `--user=${user}`], {
    quiet: true,
  });
  await answering(child, socket, path.join(folder, 'error.log'));
  const passwords = passwordsOf(folder);
  createUsers(socket, passwords);
  const at = `127.0.0.1:${port}/${NAME}`;
  return {
    child,
    ownerUrl: `mysql://tl_owner:${passwords.owner}@${at}`,
    appUrl: `mysql://tl_app:${passwords.app}@${at}`,
  };
}

function socketPath(folder: string): string {
  const near = path.resolve(folder, 'db.sock');
  if (near.length <= SOCKET_LIMIT) return near;
  return path.join(tmpdir(), `tl-${createHash('sha256').update(near).digest('hex').slice(0, 12)}.sock`);
}

function settings(data: string, socket: string, port: number): string {
  const folder = path.dirname(data);
  return [
    '[mysqld]',
    `datadir=${path.resolve(data)}`,
    `socket=${socket}`,
    `port=${port}`,
    `pid-file=${path.resolve(folder, 'mariadb.pid')}`,
    `log-error=${path.resolve(folder, 'error.log')}`,
    'bind-address=127.0.0.1',
    'skip-name-resolve',
    'character-set-server=utf8mb4',
    'default-time-zone=+00:00',
    'transaction-isolation=READ-COMMITTED',
    'local-infile=0',
    'sql_mode=STRICT_ALL_TABLES,ONLY_FULL_GROUP_BY,NO_ZERO_DATE,NO_ZERO_IN_DATE',
    'innodb_flush_log_at_trx_commit=1',
    '',
  ].join('\n');
}

async function answering(child: Child, socket: string, log: string): Promise<void> {
  for (let tries = 0; tries < 200; tries += 1) {
    if (child.process.exitCode !== null)
      throw new Error(
        `MariaDB did not start; is its port taken? It says why in ${path.relative(process.cwd(), log)}.`,
      );
    try {
      execFileSync('mariadb', ['--no-defaults', '-S', socket, '-e', 'SELECT 1'], { stdio: 'ignore' });
      return;
    } catch {
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }
  throw new Error(`MariaDB does not answer; it says why in ${path.relative(process.cwd(), log)}.`);
}

/** Passwords made once and kept beside the data, readable by their owner alone. */
function passwordsOf(folder: string): { readonly owner: string; readonly app: string } {
  const file = path.join(folder, 'passwords.json');
  if (!existsSync(file)) {
    const made = { owner: randomBytes(18).toString('hex'), app: randomBytes(18).toString('hex') };
    writeFileSync(file, JSON.stringify(made), { mode: 0o600 });
  }
  return JSON.parse(readFileSync(file, 'utf8')) as { owner: string; app: string };
}

function createUsers(socket: string, passwords: { readonly owner: string; readonly app: string }): void {
  const sql = `CREATE DATABASE IF NOT EXISTS ${NAME};
    CREATE USER IF NOT EXISTS 'tl_owner'@'127.0.0.1' IDENTIFIED BY '${passwords.owner}';
    CREATE USER IF NOT EXISTS 'tl_app'@'127.0.0.1' IDENTIFIED BY '${passwords.app}';
    GRANT ALL ON ${NAME}.* TO 'tl_owner'@'127.0.0.1' WITH GRANT OPTION;`;
  execFileSync('mariadb', ['--no-defaults', '-S', socket], {
    input: sql,
    stdio: ['pipe', 'ignore', 'inherit'],
  });
}
