import { execFileSync, spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { userInfo } from 'node:os';
import path from 'node:path';
import { programPath } from './programs.ts';

/** A MariaDB of our own below one folder. All paths are absolute. */
export interface MariadbInstance {
  readonly folder: string;
  readonly config: string;
  readonly socket: string;
  readonly log: string;
}

/** A Unix socket's path has at most 107 characters. */
const SOCKET_LIMIT = 107;

export function instanceIn(folder: string): MariadbInstance {
  const absolute = path.resolve(folder);
  const near = path.join(absolute, 'db.sock');
  const short = createHash('sha256').update(absolute).digest('hex').slice(0, 12);
  return {
    folder: absolute,
    config: path.join(absolute, 'my.cnf'),
    socket: Buffer.byteLength(near) <= SOCKET_LIMIT ? near : `/tmp/tenderlight-${short}/db.sock`,
    log: path.join(absolute, 'error.log'),
  };
}

/**
 * Makes the data on the first use and writes the settings: loopback, own port and socket, durable, strict.
 * Throws with a sentence when the data belong to somebody else.
 *
 * @param extra further lines for the server's settings
 */
export function prepare(instance: MariadbInstance, port: number, extra: readonly string[] = []): void {
  mkdirSync(instance.folder, { recursive: true, mode: 0o700 });
  mkdirSync(path.dirname(instance.socket), { recursive: true, mode: 0o700 });
  const data = path.join(instance.folder, 'data');
  if (!existsSync(data)) makeData(data);
  if (statSync(data).uid !== process.getuid?.())
    throw new Error(
      `The database in ${data} was made by another user. Start as that user, or remove the folder to begin anew.`,
    );
  writeFileSync(instance.config, settings(instance, data, port, extra));
}

/** Makes the data beside their place and moves them there whole: an interrupted first start leaves nothing half made. */
function makeData(data: string): void {
  const making = `${data}.making`;
  rmSync(making, { recursive: true, force: true });
  const user = userInfo().username;
  const args = [
    '--no-defaults',
    // Relative: the install script splits a path with spaces.
    `--datadir=./${path.basename(making)}`,
    `--user=${user}`,
    '--auth-root-authentication-method=socket',
    `--auth-root-socket-user=${user}`,
    '--skip-test-db',
    '--skip-name-resolve',
  ];
  try {
    execFileSync(programPath('mariadb-install-db'), args, {
      cwd: path.dirname(making),
      stdio: ['ignore', 'pipe', 'pipe'],
    });
  } catch (error) {
    const said = error as { stdout?: Buffer; stderr?: Buffer };
    throw new Error(
      `MariaDB's data could not be made in ${data}:\n${said.stdout?.toString() ?? ''}${said.stderr?.toString() ?? ''}`,
    );
  }
  renameSync(making, data);
}

function settings(instance: MariadbInstance, data: string, port: number, extra: readonly string[]): string {
  return [
    '[mysqld]',
    `datadir="${data}"`,
    `socket="${instance.socket}"`,
    `port=${port}`,
    `pid-file="${path.join(instance.folder, 'mariadb.pid')}"`,
    `log-error="${instance.log}"`,
    'bind-address=127.0.0.1',
    'skip-name-resolve',
    'character-set-server=utf8mb4',
    'default-time-zone=+00:00',
    'transaction-isolation=READ-COMMITTED',
    'local-infile=0',
    // The default mode rounds silently and takes zero dates.
    'sql_mode=STRICT_ALL_TABLES,ONLY_FULL_GROUP_BY,NO_ZERO_DATE,NO_ZERO_IN_DATE',
    // What was committed survives a power cut.
    'innodb_flush_log_at_trx_commit=1',
    ...extra,
    '',
  ].join('\n');
}

/** The server's program and arguments. MariaDB refuses to run as root unless told so. */
export function serverCommand(instance: MariadbInstance): readonly [string, ...string[]] {
  return [programPath('mariadbd'), `--defaults-file=${instance.config}`, `--user=${userInfo().username}`];
}

/** Process id of the server that runs on this instance. A pid file is believed only if that process was given our settings. */
export function runningPid(instance: MariadbInstance): number | undefined {
  try {
    const pid = Number(readFileSync(path.join(instance.folder, 'mariadb.pid'), 'utf8'));
    const command = readFileSync(`/proc/${pid}/cmdline`, 'utf8').split('\0');
    return command.includes(`--defaults-file=${instance.config}`) ? pid : undefined;
  } catch {
    return undefined;
  }
}

/** Runs SQL as the server's root, who is known by the socket; answers rows as lines, columns parted by tabs. */
export function asRoot(instance: Pick<MariadbInstance, 'socket'>, sql: string): string {
  return execFileSync(programPath('mariadb'), ['--no-defaults', '-S', instance.socket, '-N', '-B'], {
    input: sql,
    encoding: 'utf8',
    stdio: ['pipe', 'pipe', 'pipe'],
  });
}

/** Whether the server answers. */
export function answers(instance: MariadbInstance): boolean {
  try {
    asRoot(instance, 'SELECT 1');
    return true;
  } catch {
    return false;
  }
}

const PATIENCE_MS = 60_000;

/** Waits until the server answers. Throws with a sentence and the server's own words when it ends or stays silent. */
export async function untilAnswering(instance: MariadbInstance, ended: () => boolean): Promise<void> {
  const until = Date.now() + PATIENCE_MS;
  while (!answers(instance)) {
    if (ended() || Date.now() > until)
      throw new Error(`MariaDB did not start. It says in ${instance.log}:\n${complaints(instance)}`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

function complaints(instance: MariadbInstance): string {
  if (!existsSync(instance.log)) return 'nothing';
  const lines = readFileSync(instance.log, 'utf8').trimEnd().split('\n');
  const errors = lines.filter((line) => line.includes('[ERROR]'));
  return (errors.length > 0 ? errors : lines).slice(-4).join('\n');
}

/** Starts the server so that it outlives this process, and waits until it answers. Throws with a sentence. */
export async function startApart(instance: MariadbInstance, port: number): Promise<void> {
  prepare(instance, port);
  const [program, ...args] = serverCommand(instance);
  const server = spawn(program, args, { stdio: 'ignore', detached: true });
  let ended = false;
  server.once('exit', () => {
    ended = true;
  });
  await untilAnswering(instance, () => ended);
  server.unref();
}

/** Asks the running server to end and waits for it. False when none ran. */
export async function stopRunning(instance: MariadbInstance): Promise<boolean> {
  const pid = runningPid(instance);
  if (pid === undefined) return false;
  process.kill(pid, 'SIGTERM');
  await untilEnded(instance);
  return true;
}

/** Waits for a server that is on its way out. Throws with a sentence when it stays. */
export async function untilEnded(instance: MariadbInstance): Promise<void> {
  const until = Date.now() + PATIENCE_MS;
  while (runningPid(instance) !== undefined) {
    if (Date.now() > until) throw new Error(`MariaDB (process ${runningPid(instance)}) does not end.`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}
