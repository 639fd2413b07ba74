import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';

const LOCK = '.data/running.json';

interface Running {
  readonly pid: number;
  readonly address: string;
}

/** The start that is already running here, if its process still is one of ours. */
export function runningStart(): Running | undefined {
  if (!existsSync(LOCK)) return undefined;
  try {
    const running = JSON.parse(readFileSync(LOCK, 'utf8')) as Running;
    const command = readFileSync(`/proc/${running.pid}/cmdline`, 'utf8');
    return command.includes('supervisor/start.ts') && running.pid !== process.pid ? running : undefined;
  } catch {
    return undefined;
  }
}

/** Takes the lock for this process. */
export function takeStart(address: string): void {
  writeFileSync(LOCK, JSON.stringify({ pid: process.pid, address } satisfies Running));
}

export function letStartGo(): void {
  rmSync(LOCK, { force: true });
}
