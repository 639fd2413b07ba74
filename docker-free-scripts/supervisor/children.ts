import { type ChildProcess, spawn } from 'node:child_process';

/** A program the supervisor started and ends again. */
export interface Child {
  readonly name: string;
  readonly process: ChildProcess;
}

export interface ChildOptions {
  readonly env?: Readonly<Record<string, string>>;
  /** Standard output is read for a JSON ready line instead of shown. */
  readonly quiet?: boolean;
}

/** Starts a program in a group of its own: a Ctrl-C of the terminal reaches the supervisor alone, which ends them in order. */
export function startChild(
  name: string,
  command: string,
  args: readonly string[],
  options: ChildOptions = {},
): Child {
  const child = spawn(command, args, {
    env: { ...process.env, ...options.env },
    stdio: ['ignore', options.quiet ? 'pipe' : 'inherit', 'inherit'],
    detached: true,
  });
  return { name, process: child };
}

/** Waits for the JSON line a stand-in prints when it answers. Throws with a sentence when it ends before. */
export function readyLine(child: Child): Promise<Record<string, unknown>> {
  return new Promise((resolve, reject) => {
    let text = '';
    child.process.stdout?.on('data', (chunk: Buffer) => {
      text += chunk.toString();
      const line = text.split('\n').find((each) => each.startsWith('{'));
      if (line && text.includes('\n')) resolve(JSON.parse(line) as Record<string, unknown>);
    });
    child.process.once('exit', () =>
      reject(new Error(`${child.name} did not start. Is one of its ports taken?`)),
    );
    child.process.once('error', (error) =>
      reject(new Error(`${child.name} did not start: ${error.message}`)),
    );
  });
}

const PATIENCE_MS = 12_000;

/** Asks a child to end, waits, and in the end does not ask. */
export async function endChild(child: Child): Promise<void> {
  const { process: running } = child;
  if (running.exitCode !== null || running.signalCode !== null || running.pid === undefined) return;
  const ended = new Promise<void>((resolve) => running.once('exit', () => resolve()));
  running.kill('SIGTERM');
  const late = setTimeout(() => running.kill('SIGKILL'), PATIENCE_MS);
  await ended;
  clearTimeout(late);
}

/** Runs a program to its end; throws with a sentence when it fails. */
export function runToEnd(
  name: string,
  command: string,
  args: readonly string[],
  env: Readonly<Record<string, string>>,
): Promise<void> {
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, { env: { ...process.env, ...env }, stdio: 'inherit' });
    child.once('error', (error) => reject(new Error(`${name} failed: ${error.message}`)));
    child.once('exit', (status) =>
      status === 0 ? resolve() : reject(new Error(`${name} failed; what went wrong stands above.`)),
    );
  });
}
