import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';

/** What the build is made from; another hash means another build. */
const SOURCES = [
  'server',
  'migrations',
  'client',
  'package-lock.json',
  'vite.config.ts',
  'tsconfig.json',
  'tsconfig.build.json',
];
const MARK = 'dist/built.sha256';

/** Builds server and client when their sources have changed since the last build. Ends the process with a sentence on failure. */
export function build(): void {
  const hash = hashOf(SOURCES);
  if (existsSync(MARK) && readFileSync(MARK, 'utf8') === hash) return;
  process.stdout.write('Building…\n');
  run('the server', ['node_modules/typescript/bin/tsc', '-p', 'tsconfig.build.json']);
  run('the client', ['node_modules/vite/bin/vite.js', 'build', '--logLevel', 'warn']);
  mkdirSync('dist', { recursive: true });
  writeFileSync(MARK, hash);
}

function run(what: string, args: readonly string[]): void {
  const { status } = spawnSync(process.execPath, args, { stdio: ['ignore', 'inherit', 'inherit'] });
  if (status !== 0) {
    process.stderr.write(`Building ${what} failed; what went wrong stands above.\n`);
    process.exit(1);
  }
}

function hashOf(paths: readonly string[]): string {
  const hash = createHash('sha256');
  for (const file of paths.flatMap(filesBelow)) hash.update(file).update(readFileSync(file));
  return hash.digest('hex');
}

function filesBelow(entry: string): string[] {
  if (!existsSync(entry)) return [];
  try {
    return readdirSync(entry, { withFileTypes: true })
      .sort((a, b) => (a.name < b.name ? -1 : 1))
      .flatMap((each) =>
        each.isDirectory() ? filesBelow(path.join(entry, each.name)) : [path.join(entry, each.name)],
      );
  } catch {
    return [entry];
  }
}
