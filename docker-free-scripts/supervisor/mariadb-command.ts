import { existsSync } from 'node:fs';
import { instanceIn, runningPid, startApart, stopRunning } from './mariadb-instance.ts';
import { ownDatabase } from './own-database.ts';
import { needFreePorts, portFrom } from './ports.ts';
import { DATABASE_FOLDER, DATABASE_PORT } from './settings.ts';

const instance = instanceIn(DATABASE_FOLDER);

/** Exit status of a service that is not running, as service commands have it. */
const NOT_RUNNING = 3;

async function start(): Promise<void> {
  if (runningPid(instance) === undefined) {
    const port = portFrom(process.env, DATABASE_PORT.variable, DATABASE_PORT.usual);
    await needFreePorts([{ variable: DATABASE_PORT.variable, port }]);
    await startApart(instance, port);
  }
  const { app } = ownDatabase(instance);
  say(`MariaDB is running at ${new URL(app).host}; its socket is ${instance.socket}.`);
}

async function stop(): Promise<void> {
  say((await stopRunning(instance)) ? 'MariaDB is stopped.' : 'MariaDB was not running.');
}

function status(): void {
  const pid = runningPid(instance);
  say(pid === undefined ? 'MariaDB is not running.' : `MariaDB is running as process ${pid}.`);
  if (pid === undefined) process.exitCode = NOT_RUNNING;
}

function say(sentence: string): void {
  process.stdout.write(`${sentence}\n`);
}

const commands: Readonly<Record<string, () => void | Promise<void>>> = { start, stop, status };
const command = commands[process.argv[2] ?? ''];
try {
  if (existsSync('.env')) process.loadEnvFile('.env');
  if (!command) throw new Error('Say what to do: mariadb.sh start, stop or status.');
  await command();
} catch (error) {
  process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
  process.exitCode = 1;
}
