import { spawn, spawnSync } from 'node:child_process';
import { chmodSync, existsSync, mkdirSync, readFileSync, symlinkSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, onTestFinished, test } from 'vitest';
import { scratchFolder } from '#tests/support/scratch-folder';

const SCRIPTS = fileURLToPath(new URL('../../../docker-free-scripts', import.meta.url));

/** A bare tree with our scripts and nothing installed; `programs` stand in for those of the machine. */
function bareTree(programs: Readonly<Record<string, string>> = {}) {
  const folder = scratchFolder();
  const bin = path.join(folder, 'bin');
  mkdirSync(bin);
  symlinkSync(SCRIPTS, path.join(folder, 'docker-free-scripts'));
  writeFileSync(path.join(folder, 'package-lock.json'), '{"first": true}');
  for (const [name, script] of Object.entries(programs)) {
    writeFileSync(path.join(bin, name), `#!/bin/sh\n${script}\n`);
    chmodSync(path.join(bin, name), 0o755);
  }
  const run = (script: string) => {
    const { status, stdout, stderr } = spawnSync('sh', ['-euc', script], {
      cwd: folder,
      encoding: 'utf8',
      env: { PATH: `${bin}:${process.env.PATH}` },
    });
    return { status, stdout, stderr };
  };
  return { folder, run };
}

const SET_UP = '. docker-free-scripts/setup.sh';

describe('the set-up of both commands', () => {
  test('a Node.js that is too old · is refused in a sentence', () => {
    const { run } = bareTree({ node: 'case "$1" in --version) echo v18.19.1;; *) exit 1;; esac' });
    expect(run('sh docker-free-scripts/start.sh')).toMatchObject({
      status: 1,
      stderr: 'Tenderlight needs Node.js 20.19 or newer; this is v18.19.1.\n',
    });
  });

  test('npm packages · are installed once for each lock', () => {
    const { folder, run } = bareTree({ npm: 'mkdir -p node_modules; echo "$1" >>npm.log' });
    const installs = () => readFileSync(path.join(folder, 'npm.log'), 'utf8');
    const install = `${SET_UP}; need_data_folder; need_packages`;
    expect(run(install).status).toBe(0);
    expect(run(install).status).toBe(0);
    expect(installs()).toBe('ci\n');
    writeFileSync(path.join(folder, 'package-lock.json'), '{"second": true}');
    expect(run(install).status).toBe(0);
    expect(installs()).toBe('ci\nci\n');
  });

  test('an installation that fails · is told and tried again', () => {
    const { folder, run } = bareTree({ npm: 'mkdir -p node_modules; echo "$1" >>npm.log; exit 1' });
    const install = `${SET_UP}; need_data_folder; need_packages`;
    expect(run(install)).toMatchObject({ status: 1, stderr: expect.stringContaining('Run npm ci') });
    expect(run(install).status).toBe(1);
    expect(readFileSync(path.join(folder, 'npm.log'), 'utf8')).toBe('ci\nci\n');
  });

  test('a Debian package that is missing · is installed by root, or by sudo that asks nothing', () => {
    const apt = { 'apt-get': 'echo "$@" >>apt.log' };
    const need = `${SET_UP}; need_debian no-such-program its-package another`;
    const asRoot = bareTree({ ...apt, id: 'echo 0' });
    expect(asRoot.run(need).status).toBe(0);
    const bySudo = bareTree({ ...apt, id: 'echo 1000', sudo: '[ "$1" = -n ]; shift; "$@"' });
    expect(bySudo.run(need).status).toBe(0);
    for (const { folder } of [asRoot, bySudo])
      expect(readFileSync(path.join(folder, 'apt.log'), 'utf8').trim().split('\n').at(-1)).toBe(
        'install -y -qq --no-install-recommends its-package another',
      );
  });

  test('a Debian package that is missing without root · is named with the command to run', () => {
    const { folder, run } = bareTree({ 'apt-get': 'touch asked', id: 'echo 1000', sudo: 'exit 1' });
    expect(run(`${SET_UP}; need_debian no-such-program its-package`)).toMatchObject({
      status: 1,
      stderr:
        'no-such-program is missing, and installing it needs root. Run once: sudo apt-get install its-package\n',
    });
    expect(existsSync(path.join(folder, 'asked'))).toBe(false);
  });

  test('a start beside a running one · is refused with its address and touches nothing', async () => {
    const { folder, run } = bareTree({ npm: 'touch asked' });
    mkdirSync(path.join(folder, '.data'));
    writeFileSync(path.join(folder, '.data/address'), 'http://127.0.0.1:5999');
    const holder = spawn('flock', ['--no-fork', '.data/start.lock', 'sh', '-c', 'echo held; exec sleep 60'], {
      cwd: folder,
    });
    onTestFinished(() => {
      holder.kill();
    });
    await new Promise((resolve) => holder.stdout.once('data', resolve));
    expect(run('sh docker-free-scripts/start.sh')).toMatchObject({
      status: 1,
      stderr: expect.stringContaining('running from this folder already: http://127.0.0.1:5999'),
    });
    expect(existsSync(path.join(folder, 'asked'))).toBe(false);
    expect(existsSync(path.join(folder, '.data/address'))).toBe(true);
  });
});
