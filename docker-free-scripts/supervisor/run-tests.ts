import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import path from 'node:path';
import { build } from './build.ts';

const ALL = ['architecture', 'unit', 'reference', 'integration', 'faults', 'browser'];
const REPORT = '.data/test-report.json';

interface Report {
  readonly success: boolean;
  readonly testResults: readonly {
    readonly name: string;
    readonly assertionResults: readonly { readonly status: string }[];
    readonly status: string;
  }[];
}

/** Builds what browser tests open, runs the projects, prints totals by project and the one line CI reads. */
function main(): void {
  const asked = process.argv.slice(2);
  const unknown = asked.filter((name) => !ALL.includes(name));
  if (unknown.length > 0) {
    process.stderr.write(`There is no test project ${unknown.join(', ')}; there are ${ALL.join(', ')}.\n`);
    process.exit(2);
  }
  const projects = (asked.length > 0 ? asked : ALL).filter((name) => existsSync(`tests/${name}`));
  build();
  mkdirSync('.data', { recursive: true });
  rmSync(REPORT, { force: true });
  const run = spawnSync(
    process.execPath,
    [
      'node_modules/vitest/vitest.mjs',
      'run',
      '--config',
      'tests/vitest.config.ts',
      ...projects.flatMap((name) => ['--project', name]),
      '--reporter=default',
      '--reporter=json',
      `--outputFile.json=${REPORT}`,
    ],
    { stdio: 'inherit' },
  );
  if (!existsSync(REPORT)) {
    process.stderr.write('The tests ended without a report.\n');
    process.exit(1);
  }
  const report = JSON.parse(readFileSync(REPORT, 'utf8')) as Report;
  let passed = 0;
  let failed = 0;
  for (const project of projects) {
    const files = report.testResults.filter((file) =>
      path.relative(process.cwd(), file.name).startsWith(`tests/${project}/`),
    );
    const statuses = files.flatMap((file) => file.assertionResults.map((test) => test.status));
    const good = statuses.filter((status) => status === 'passed').length;
    // A file that failed before its first test counts as one failure.
    const bad =
      statuses.filter((status) => status === 'failed').length +
      files.filter((file) => file.status === 'failed' && file.assertionResults.length === 0).length;
    process.stdout.write(
      `${project.padEnd(14)} ${String(good).padStart(5)} passed ${String(bad).padStart(5)} failed\n`,
    );
    passed += good;
    failed += bad;
  }
  if (run.status !== 0 && failed === 0) failed = 1;
  process.stdout.write(`${passed} passed, ${failed} failed\n`);
  process.exit(failed === 0 && passed > 0 ? 0 : 1);
}

main();
