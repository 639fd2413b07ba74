import type { Collections, Kind } from './records.ts';
import { KINDS } from './records.ts';

/** One change of a finished transaction: a record put, or (with `record` null) taken out. */
export interface Change {
  readonly kind: Kind;
  readonly id: string;
  readonly record: Collections[Kind] | null;
}

type Maps = { [K in Kind]: Map<string, Collections[K]> };

/**
 * All state, in memory, changed only inside `transact`: either every change of the work happens and is written
 * down in one line, or none does. Records are never changed in place; a new version is put under the same id.
 */
export class Store {
  readonly #maps = Object.fromEntries(KINDS.map((kind) => [kind, new Map()])) as unknown as Maps;
  readonly #write: (changes: readonly Change[]) => void;
  #before: Map<string, Change> | null = null;
  #lastSeq = 0;

  /**
   * @param saved changes of earlier lives, oldest first
   * @param write makes a transaction's changes durable before its work counts as done
   */
  constructor(saved: Iterable<Change>, write: (changes: readonly Change[]) => void) {
    for (const change of saved) this.#apply(change);
    this.#write = write;
  }

  find<K extends Kind>(kind: K, id: string | null): Collections[K] | undefined {
    return id === null ? undefined : this.#maps[kind].get(id);
  }

  /** The record that must be there; a missing one is a bug of the stand-in, not of its caller. */
  get<K extends Kind>(kind: K, id: string): Collections[K] {
    const record = this.#maps[kind].get(id);
    if (record === undefined) throw new Error(`The stand-in holds no ${kind} ${id}`);
    return record;
  }

  all<K extends Kind>(kind: K): Collections[K][] {
    return [...this.#maps[kind].values()];
  }

  count(kind: Kind): number {
    return this.#maps[kind].size;
  }

  /** The record of its kind that was put first, among those still here. */
  oldest<K extends Kind>(kind: K): Collections[K] | undefined {
    return this.#maps[kind].values().next().value;
  }

  nextSeq(): number {
    this.#lastSeq += 1;
    return this.#lastSeq;
  }

  put<K extends Kind>(kind: K, record: Collections[K]): Collections[K] {
    this.#remember(kind, record.id);
    this.#maps[kind].set(record.id, record);
    return record;
  }

  remove(kind: Kind, id: string): void {
    this.#remember(kind, id);
    this.#maps[kind].delete(id);
  }

  /** Runs `work` as one transaction; a nested call joins the outer one. */
  transact<T>(work: () => T): T {
    if (this.#before !== null) return work();
    const before = new Map<string, Change>();
    this.#before = before;
    try {
      const result = work();
      const changes = [...before.values()].map(({ kind, id }) => this.#current(kind, id));
      if (changes.length > 0) this.#write(changes);
      return result;
    } catch (error) {
      for (const change of before.values()) this.#apply(change);
      throw error;
    } finally {
      this.#before = null;
    }
  }

  /** The whole state as changes, for writing it down afresh. */
  snapshot(): Change[] {
    return KINDS.flatMap((kind) => this.all(kind).map((record) => ({ kind, id: record.id, record })));
  }

  #current(kind: Kind, id: string): Change {
    return { kind, id, record: this.#maps[kind].get(id) ?? null };
  }

  #remember(kind: Kind, id: string): void {
    if (this.#before === null) throw new Error('State changes only inside a transaction');
    const key = `${kind}/${id}`;
    if (!this.#before.has(key)) this.#before.set(key, this.#current(kind, id));
  }

  #apply({ kind, id, record }: Change): void {
    const map = this.#maps[kind] as Map<string, Collections[Kind]>;
    if (record === null) map.delete(id);
    else {
      map.set(id, record);
      this.#lastSeq = Math.max(this.#lastSeq, record.seq);
    }
  }
}
