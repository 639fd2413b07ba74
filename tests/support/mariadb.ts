import { mkdtempSync, readdirSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { endChild, hasEnded, startChild } from '#stand-ins/supervisor/children';
import {
  asRoot,
  instanceIn,
  prepare,
  runningPid,
  serverCommand,
  untilAnswering,
} from '#stand-ins/supervisor/mariadb-instance';
import { freePort } from '#stand-ins/supervisor/ports';

export { freePort };

/** A MariaDB of one test run. */
export interface TestServer {
  readonly port: number;
  readonly socket: string;
  stop(): Promise<void>;
}

const PREFIX = 'tl-db-';
const STALE_AFTER_MS = 60 * 60 * 1000;

/**
 * Starts a private MariaDB in a temporary folder; the folder goes with it, and the server with this process. One that runs
 * already and lets us in as its root by the socket TENDERLIGHT_TEST_MARIADB_SOCKET is used instead and left running.
 */
export async function startTestMariadb(): Promise<TestServer> {
  const given = process.env.TENDERLIGHT_TEST_MARIADB_SOCKET;
  if (given) return runningServer(given);
  clearAway();
  const folder = mkdtempSync(path.join(tmpdir(), PREFIX));
  const instance = instanceIn(folder);
  const port = await freePort();
  prepare(instance, port, ['max_connections=300']);
  const [program, ...args] = serverCommand(instance);
  const server = startChild('MariaDB', program, args, { log: instance.log });
  try {
    await untilAnswering(instance, () => hasEnded(server));
  } catch (error) {
    await endChild(server);
    throw error;
  }
  return {
    port,
    socket: instance.socket,
    async stop() {
      await endChild(server);
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

function runningServer(socket: string): TestServer {
  return { socket, port: Number(asRoot({ socket }, 'SELECT @@port')), stop: () => Promise.resolve() };
}

/** Removes what a test run that was killed an hour or more ago left behind. */
function clearAway(): void {
  for (const name of readdirSync(tmpdir()).filter((each) => each.startsWith(PREFIX))) {
    const folder = path.join(tmpdir(), name);
    const stats = statSync(folder, { throwIfNoEntry: false });
    if (stats === undefined || stats.uid !== process.getuid?.()) continue;
    if (Date.now() - stats.mtimeMs > STALE_AFTER_MS && runningPid(instanceIn(folder)) === undefined)
      rmSync(folder, { recursive: true, force: true });
  }
}
