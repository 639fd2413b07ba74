import { appendFileSync, existsSync, mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Change } from './store.ts';
import { Store } from './store.ts';

const LOG = 'state.ndjson';

/** Past this much appended text the log is rewritten, so that a stand-in left running does not fill the disk. */
const COMPACT_AFTER_CHARACTERS = 64_000_000;

export interface StoreOnDisk {
  readonly store: Store;
  /** Rewrites the log so that it holds each record once. */
  compact(): void;
}

/** State that lives and dies with the process. */
export function openStoreInMemory(): StoreOnDisk {
  return { store: new Store([], () => {}), compact: () => {} };
}

/**
 * State kept in a folder as a log of transactions, one JSON line each. A line is appended whole before the
 * caller is answered, so that a killed process loses nothing it has answered for; a half-written last line
 * belongs to a transaction nobody was told of and is dropped.
 *
 * @throws when an earlier line cannot be read: the state would silently differ from what was promised
 */
export function openStoreInFolder(folder: string): StoreOnDisk {
  mkdirSync(folder, { recursive: true });
  const file = join(folder, LOG);
  let appended = 0;
  const store: Store = new Store(readChanges(file), (changes) => {
    const line = `${JSON.stringify(changes)}\n`;
    appendFileSync(file, line);
    appended += line.length;
    if (appended > COMPACT_AFTER_CHARACTERS) compact();
  });
  const compact = () => {
    const lines = store.snapshot().map((change) => `${JSON.stringify([change])}\n`);
    writeFileSync(`${file}.new`, lines.join(''));
    renameSync(`${file}.new`, file);
    appended = 0;
  };
  compact();
  return { store, compact };
}

function readChanges(file: string): Change[] {
  if (!existsSync(file)) return [];
  const lines = readFileSync(file, 'utf8').split('\n');
  lines.pop();
  return lines.flatMap((line, index) => {
    try {
      return JSON.parse(line) as Change[];
    } catch (cause) {
      throw new Error(`${file}: line ${index + 1} is not readable; remove the folder to begin anew`, {
        cause,
      });
    }
  });
}
