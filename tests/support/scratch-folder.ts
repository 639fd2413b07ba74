import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { onTestFinished } from 'vitest';

/** A folder for several tests; whoever makes it removes it. */
export function makeScratchFolder(): string {
  return mkdtempSync(path.join(tmpdir(), 'tl-scratch-'));
}

/** A folder of a test's own, gone when the test is. */
export function scratchFolder(): string {
  const folder = makeScratchFolder();
  onTestFinished(() => rmSync(folder, { recursive: true, force: true, maxRetries: 5 }));
  return folder;
}
