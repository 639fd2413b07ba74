import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, readdirSync, rmSync, statSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { createConnection } from 'mysql2/promise';
import { afterAll, beforeAll, describe, expect, onTestFinished, test } from 'vitest';
import {
  asRoot,
  instanceIn,
  type MariadbInstance,
  prepare,
  runningPid,
  startApart,
  stopRunning,
} from '#stand-ins/supervisor/mariadb-instance';
import { type DatabaseUrls, ownDatabase } from '#stand-ins/supervisor/own-database';
import { freePort } from '#tests/support/mariadb';
import { makeScratchFolder, scratchFolder } from '#tests/support/scratch-folder';

const COMMAND = fileURLToPath(
  new URL('../../../docker-free-scripts/supervisor/mariadb-command.ts', import.meta.url),
);
const TSX = import.meta.resolve('tsx');

test('mariadb.sh in a folder with a long name and spaces · starts, tells, stops as a service does', async () => {
  const folder = path.join(scratchFolder(), 'a long name with spaces '.repeat(6).trim());
  mkdirSync(folder);
  const instance = instanceIn(path.join(folder, '.data/mariadb'));
  const port = String(await freePort());
  const run = (...args: string[]) => {
    const { status, stdout, stderr } = spawnSync(
      process.execPath,
      ['--conditions=source', '--import', TSX, COMMAND, ...args],
      { cwd: folder, encoding: 'utf8', env: { PATH: process.env.PATH, TENDERLIGHT_DB_PORT: port } },
    );
    return { status, stdout, stderr };
  };
  onTestFinished(async () => {
    await stopRunning(instance);
    rmSync(path.dirname(instance.socket), { recursive: true, force: true });
  });
  expect(run('status')).toMatchObject({ status: 3, stdout: 'MariaDB is not running.\n' });
  expect(run('start')).toMatchObject({
    status: 0,
    stdout: `MariaDB is running at 127.0.0.1:${port}; its socket is ${instance.socket}.\n`,
  });
  expect(instance.socket.length).toBeLessThan(107);
  expect(statSync(path.dirname(instance.socket)).mode & 0o077).toBe(0);
  const pid = runningPid(instance);
  expect(run('start').status).toBe(0);
  expect(run('status')).toMatchObject({ status: 0, stdout: `MariaDB is running as process ${pid}.\n` });
  expect(run('stop')).toMatchObject({ status: 0, stdout: 'MariaDB is stopped.\n' });
  expect(runningPid(instance)).toBeUndefined();
  expect(run('dance')).toMatchObject({ status: 1, stderr: expect.stringContaining('start, stop or status') });
}, 120_000);

describe('the private MariaDB', () => {
  let instance: MariadbInstance;
  let urls: DatabaseUrls;
  beforeAll(async () => {
    instance = instanceIn(makeScratchFolder());
    await startApart(instance, await freePort());
    urls = ownDatabase(instance);
  });
  afterAll(async () => {
    await stopRunning(instance);
    rmSync(instance.folder, { recursive: true, force: true });
  });

  test('settings · are loopback, durable and strict', () => {
    const [settings] = asRoot(
      instance,
      `SELECT @@bind_address, @@innodb_flush_log_at_trx_commit, @@tx_isolation, @@local_infile, @@time_zone,
        @@sql_mode LIKE '%STRICT_ALL_TABLES%', @@sql_mode LIKE '%NO_ZERO_DATE%'`,
    ).split('\n');
    expect(settings?.split('\t')).toEqual(['127.0.0.1', '1', 'READ-COMMITTED', '0', '+00:00', '1', '1']);
  });

  test('owner and application · are two, with passwords nobody else can read', async () => {
    expect(new URL(urls.owner).password).not.toBe(new URL(urls.app).password);
    expect(statSync(path.join(instance.folder, 'passwords.json')).mode & 0o777).toBe(0o600);
    expect(statSync(path.join(instance.folder, 'data')).mode & 0o077).toBe(0);
    const owner = await createConnection(urls.owner);
    await owner.query('CREATE TABLE kept (kept_id INT PRIMARY KEY)');
    await owner.end();
    // Until migrations grant it something, the application's user may not even come in.
    await expect(createConnection(urls.app)).rejects.toMatchObject({ errno: 1044 });
  });

  test('another start · finds users, passwords and data again', async () => {
    expect(await stopRunning(instance)).toBe(true);
    await startApart(instance, Number(new URL(urls.owner).port));
    expect(ownDatabase(instance)).toEqual(urls);
    const owner = await createConnection(urls.owner);
    expect((await owner.query('SELECT * FROM kept'))[0]).toEqual([]);
    await owner.end();
  });
});

test('a pid file of another process · is not believed', async () => {
  const instance = instanceIn(scratchFolder());
  writeFileSync(path.join(instance.folder, 'mariadb.pid'), `${process.pid}\n`);
  expect(runningPid(instance)).toBeUndefined();
  expect(await stopRunning(instance)).toBe(false);
});

test('data that were half made · are made anew; what MariaDB refuses is told in its own words', async () => {
  const instance = instanceIn(scratchFolder());
  const data = path.join(instance.folder, 'data');
  mkdirSync(`${data}.making/leftover`, { recursive: true });
  prepare(instance, 1);
  expect(existsSync(`${data}.making`)).toBe(false);
  expect(readdirSync(data)).toContain('mysql');
  expect(readdirSync(data)).not.toContain('leftover');
  writeFileSync(path.join(data, 'ib_logfile0'), 'not a log');
  await expect(startApart(instance, await freePort())).rejects.toThrow(
    /MariaDB did not start[\s\S]*\[ERROR\]/,
  );
});
