import { type ChildProcess, spawn } from 'node:child_process';
import { closeSync, openSync } from 'node:fs';

/** A program that was started here and is ended here. */
export interface Child {
  readonly name: string;
  readonly process: ChildProcess;
}

export interface ChildOptions {
  readonly env?: Readonly<Record<string, string>>;
  /** Standard output is read for a JSON ready line instead of shown. */
  readonly quiet?: boolean;
  /** Both outputs are added to this file instead of shown. */
  readonly log?: string;
}

/**
 * Starts a program in a session of its own, so that a Ctrl-C of the terminal reaches the supervisor alone, which ends its
 * children in order. Should the supervisor be killed outright, the kernel asks the child to end (setpriv is Debian's util-linux).
 */
export function startChild(
  name: string,
  command: string,
  args: readonly string[],
  options: ChildOptions = {},
): Child {
  const log = options.log === undefined ? undefined : openSync(options.log, 'a');
  const child = spawn('setpriv', ['--pdeathsig', 'TERM', '--', command, ...args], {
    env: { ...process.env, ...options.env },
    stdio: ['ignore', log ?? (options.quiet ? 'pipe' : 'inherit'), log ?? 'inherit'],
    detached: true,
  });
  if (log !== undefined) closeSync(log);
  return { name, process: child };
}

/** Waits for the JSON line a stand-in prints when it answers. Rejects with a sentence when it ends before. */
export function readyLine(child: Child): Promise<Record<string, unknown>> {
  return new Promise((resolve, reject) => {
    let text = '';
    child.process.stdout?.on('data', (chunk: Buffer) => {
      text += chunk.toString();
      const [line] = text.split('\n').filter((each, at, all) => each.startsWith('{') && at < all.length - 1);
      if (line) resolve(JSON.parse(line) as Record<string, unknown>);
    });
    child.process.once('exit', () =>
      reject(new Error(`${child.name} did not start; what it said stands above.`)),
    );
    child.process.once('error', (error) =>
      reject(new Error(`${child.name} did not start: ${error.message}`)),
    );
  });
}

const PATIENCE_MS = 20_000;

export function hasEnded(child: Child): boolean {
  const { exitCode, signalCode, pid } = child.process;
  return exitCode !== null || signalCode !== null || pid === undefined;
}

/** Asks a child to end, waits, and in the end does not ask. */
export async function endChild(child: Child): Promise<void> {
  if (hasEnded(child)) return;
  const ended = new Promise<void>((resolve) => child.process.once('exit', () => resolve()));
  child.process.kill('SIGTERM');
  const late = setTimeout(() => child.process.kill('SIGKILL'), PATIENCE_MS);
  await ended;
  clearTimeout(late);
}
