import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { build, CLIENT, SERVER } from './build.ts';
import { Household } from './household.ts';
import { type Report, totalsOf } from './test-totals.ts';

const ALL = ['architecture', 'unit', 'reference', 'integration', 'faults', 'browser'];

/** Whatever the tests make while they run stands in here, and goes with them even when they are killed. */
const folder = mkdtempSync(path.join(tmpdir(), 'tl-test-'));
const household = new Household(() => undefined);

/** Builds what browser tests open, runs the projects, prints totals by project and the one line CI reads. */
async function main(): Promise<number> {
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => void stop(1));
  const asked = process.argv.slice(2).filter((each) => ALL.includes(each));
  const others = process.argv.slice(2).filter((each) => !ALL.includes(each));
  const projects = (asked.length > 0 ? asked : ALL).filter((name) => existsSync(`tests/${name}`));
  await build(household, SERVER, CLIENT);
  const report = path.join(folder, 'report.json');
  const args = [
    ...['node_modules/vitest/vitest.mjs', 'run', '--config', 'tests/vitest.config.ts'],
    ...projects.flatMap((name) => ['--project', name]),
    ...['--reporter=default', '--reporter=json', `--outputFile.json=${report}`],
    ...others,
  ];
  // Vitest says by its exit status that a test failed; the report says it in full.
  const clean = await household.run('Vitest', process.execPath, args, { TMPDIR: folder }).then(
    () => true,
    () => false,
  );
  if (!existsSync(report)) throw new Error('The tests ended without a report.');
  const told = JSON.parse(readFileSync(report, 'utf8')) as Report;
  const { lines, passed, failed } = totalsOf(told, projects, { root: process.cwd(), clean });
  process.stdout.write(`\n${lines.join('\n')}\n`);
  return failed === 0 && passed > 0 ? 0 : 1;
}

/** Removes the folder; a database asked to end at the last moment may still be writing in it. */
async function removeFolder(): Promise<void> {
  for (let tries = 0; tries < 20; tries += 1) {
    try {
      rmSync(folder, { recursive: true, force: true });
      return;
    } catch {
      await new Promise((resolve) => setTimeout(resolve, 250));
    }
  }
}

let stopping = false;

async function stop(status: number): Promise<void> {
  if (stopping) return;
  stopping = true;
  await household.end();
  await removeFolder();
  process.exit(status);
}

main().then(
  (status) => stop(status),
  (error: unknown) => {
    process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
    process.stdout.write('0 passed, 1 failed\n');
    return stop(1);
  },
);
