import { type Child, type ChildOptions, endChild, startChild } from './children.ts';

/** Everything the supervisor started, in order; it ends the other way round. */
export class Household {
  readonly #children: Child[] = [];
  readonly #onLoss: (name: string) => void;
  #ending = false;

  /** @param onLoss told the name of a program that ended by itself though it was to stay */
  constructor(onLoss: (name: string) => void) {
    this.#onLoss = onLoss;
  }

  /** Starts a program that is to stay until the end. */
  start(name: string, command: string, args: readonly string[], options: ChildOptions = {}): Child {
    const child = this.#add(name, command, args, options);
    child.process.once('exit', () => {
      if (!this.#ending) this.#onLoss(name);
    });
    return child;
  }

  /** Runs a program to its end. Rejects with a sentence when it fails. */
  async run(
    name: string,
    command: string,
    args: readonly string[],
    env: Readonly<Record<string, string>> = {},
  ): Promise<void> {
    const child = this.#add(name, command, args, { env });
    await new Promise<void>((resolve, reject) => {
      child.process.once('error', (error) => reject(new Error(`${name} failed: ${error.message}`)));
      child.process.once('exit', (status) =>
        status === 0 ? resolve() : reject(new Error(`${name} failed; what went wrong stands above.`)),
      );
    });
  }

  /** Ends everything; nothing can be started any more. */
  async end(): Promise<void> {
    this.#ending = true;
    for (const child of this.#children.toReversed()) await endChild(child);
  }

  #add(name: string, command: string, args: readonly string[], options: ChildOptions): Child {
    if (this.#ending) throw new Error('Everything is being stopped.');
    const child = startChild(name, command, args, options);
    this.#children.push(child);
    return child;
  }
}
