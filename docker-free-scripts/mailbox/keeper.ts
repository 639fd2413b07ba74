import { randomUUID } from 'node:crypto';
import { mkdirSync, readdirSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';

/** Raw mails by an id that sorts by arrival. */
export interface Keeper {
  /** Throws when the mail cannot be kept. */
  add(raw: Buffer): void;
  /** Oldest first. */
  ids(): string[];
  read(id: string): Buffer | undefined;
  clear(): void;
}

const MS_DIGITS = 15;
let count = 0;

function nextId(): string {
  count += 1;
  return `${String(Date.now()).padStart(MS_DIGITS, '0')}-${String(count).padStart(6, '0')}-${randomUUID().slice(0, 8)}`;
}

/** When the mail with this id came, ISO 8601 in UTC. */
export function arrivalOf(id: string): string {
  return new Date(Number(id.slice(0, MS_DIGITS))).toISOString();
}

export function memoryKeeper(): Keeper {
  const mails = new Map<string, Buffer>();
  return {
    add: (raw) => mails.set(nextId(), raw),
    ids: () => [...mails.keys()],
    read: (id) => mails.get(id),
    clear: () => mails.clear(),
  };
}

/** Keeps a file a mail; a mail is there whole or not at all. */
export function folderKeeper(folder: string): Keeper {
  mkdirSync(folder, { recursive: true });
  const fileOf = (id: string): string => path.join(folder, `${id}.eml`);
  const ids = (): string[] =>
    readdirSync(folder)
      .filter((name) => name.endsWith('.eml'))
      .map((name) => name.slice(0, -'.eml'.length))
      .sort();
  return {
    add(raw) {
      const file = fileOf(nextId());
      writeFileSync(`${file}.part`, raw);
      renameSync(`${file}.part`, file);
    },
    ids,
    read: (id) => (ids().includes(id) ? readFileSync(fileOf(id)) : undefined),
    clear() {
      for (const id of ids()) rmSync(fileOf(id));
    },
  };
}
