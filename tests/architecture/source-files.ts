import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';

export const ROOT = fileURLToPath(new URL('../..', import.meta.url));

export interface SourceFile {
  /** From the root, with forward slashes. */
  readonly path: string;
  readonly text: string;
  /** Every module specifier of an import, an export from, or a dynamic import. */
  readonly imports: readonly string[];
}

/** The TypeScript files below folders of the project. Throws when there are none: a checker that reads nothing must fail. */
export function sourceFiles(...folders: readonly string[]): SourceFile[] {
  const files = folders.flatMap((folder) => walk(path.join(ROOT, folder)));
  if (files.length === 0) throw new Error(`No source files below ${folders.join(', ')}`);
  return files.map((file) => {
    const text = readFileSync(file, 'utf8');
    return { path: path.relative(ROOT, file).replaceAll('\\', '/'), text, imports: importsOf(text) };
  });
}

function walk(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const full = path.join(folder, entry.name);
    if (entry.isDirectory()) return walk(full);
    return /\.(ts|tsx)$/.test(entry.name) && !entry.name.endsWith('.d.ts') ? [full] : [];
  });
}

const IMPORT =
  /(?:^|\n)\s*(?:import|export)\s(?:[^'";]*?\sfrom\s)?['"]([^'"]+)['"]|import\(\s*['"]([^'"]+)['"]\s*\)/g;

function importsOf(text: string): string[] {
  return [...text.matchAll(IMPORT)]
    .map((match) => match[1] ?? match[2] ?? '')
    .filter((specifier) => specifier !== '');
}
