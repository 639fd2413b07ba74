import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import type { Household } from './household.ts';

interface Part {
  readonly name: string;
  readonly args: readonly string[];
  /** What it is made from; another hash means another build. */
  readonly sources: readonly string[];
  /** What it makes. */
  readonly made: readonly string[];
}

const COMMON = ['package.json', 'package-lock.json', 'tsconfig.json'];

export const SERVER: Part = {
  name: 'server',
  args: ['node_modules/typescript/bin/tsc', '-p', 'tsconfig.build.json'],
  sources: ['server', 'migrations', 'tsconfig.build.json', ...COMMON],
  made: ['dist/server', 'dist/migrations'],
};

export const CLIENT: Part = {
  name: 'client',
  args: ['node_modules/vite/bin/vite.js', 'build', '--logLevel', 'error'],
  sources: ['client', 'server/contract', 'server/domain', 'vite.config.ts', ...COMMON],
  made: ['dist/client'],
};

/** Builds the parts whose sources have changed since they were last built. Rejects with a sentence on failure. */
export async function build(household: Household, ...parts: readonly Part[]): Promise<void> {
  for (const part of parts) {
    const mark = `dist/${part.name}.sha256`;
    const hash = hashOf(part.sources);
    const built = existsSync(mark) && readFileSync(mark, 'utf8') === hash;
    if (built && part.made.every((folder) => existsSync(folder))) continue;
    process.stdout.write(`Building the ${part.name}…\n`);
    for (const leftover of [...part.made, mark]) rmSync(leftover, { recursive: true, force: true });
    await household.run(`Building the ${part.name}`, process.execPath, part.args, {
      // Without it Vite redraws its progress on a terminal.
      CI: 'true',
    });
    mkdirSync('dist', { recursive: true });
    writeFileSync(mark, hash);
  }
}

function hashOf(paths: readonly string[]): string {
  const hash = createHash('sha256').update(process.version);
  for (const file of paths.flatMap(filesBelow)) hash.update(`\0${file}\0`).update(readFileSync(file));
  return hash.digest('hex');
}

function filesBelow(entry: string): string[] {
  if (!statSync(entry).isDirectory()) return [entry];
  return readdirSync(entry)
    .sort()
    .flatMap((name) => filesBelow(path.join(entry, name)));
}
