import { randomBytes } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { asRoot, type MariadbInstance } from './mariadb-instance.ts';

const NAME = 'tenderlight';
const OWNER = 'tl_owner';
const APP = 'tl_app';

export interface DatabaseUrls {
  /** Migrates and grants. */
  readonly owner: string;
  /** What the server uses: the rights of the list of grants and nothing more. */
  readonly app: string;
}

/** Makes the database and its two users where missing, and tells how to reach them. The server must answer. */
export function ownDatabase(instance: MariadbInstance): DatabaseUrls {
  const passwords = passwordsOf(instance.folder);
  asRoot(
    instance,
    `CREATE DATABASE IF NOT EXISTS ${NAME};
     CREATE USER IF NOT EXISTS '${OWNER}'@'127.0.0.1';
     CREATE USER IF NOT EXISTS '${APP}'@'127.0.0.1';
     ALTER USER '${OWNER}'@'127.0.0.1' IDENTIFIED BY '${passwords.owner}';
     ALTER USER '${APP}'@'127.0.0.1' IDENTIFIED BY '${passwords.app}';
     GRANT ALL ON ${NAME}.* TO '${OWNER}'@'127.0.0.1' WITH GRANT OPTION;`,
  );
  const at = `127.0.0.1:${asRoot(instance, 'SELECT @@port').trim()}/${NAME}`;
  return {
    owner: `mysql://${OWNER}:${passwords.owner}@${at}`,
    app: `mysql://${APP}:${passwords.app}@${at}`,
  };
}

/** Passwords made once and kept beside the data, readable by their owner alone. */
function passwordsOf(folder: string): { readonly owner: string; readonly app: string } {
  const file = path.join(folder, 'passwords.json');
  if (!existsSync(file)) {
    const made = { owner: randomBytes(18).toString('hex'), app: randomBytes(18).toString('hex') };
    writeFileSync(file, JSON.stringify(made), { mode: 0o600 });
  }
  return JSON.parse(readFileSync(file, 'utf8')) as { owner: string; app: string };
}
