import { migrationSource } from '#migrations/index';
import { type Db, openDatabase, rawRows } from './db.ts';
import { appendOnlyTables, privilegesOf, TABLE_USES } from './table-grants.ts';

/** The application's database user, as the grants name it. */
export interface AppUser {
  readonly user: string;
  readonly host: string;
}

/**
 * Brings a database to the newest schema as its owner, then sets triggers and per-table grants from one list.
 * Granting on the whole database and revoking per table does nothing in MariaDB, hence table by table.
 */
export async function migrateLatest(ownerUrl: string, appUser: AppUser): Promise<void> {
  const db = openDatabase(ownerUrl, { min: 0, max: 2 });
  try {
    await db.migrate.latest({ migrationSource, tableName: 'knex_migrations' });
    await guardAppendOnlyTables(db);
    await grantTables(db, appUser);
  } finally {
    await db.destroy();
  }
}

/** Refuses UPDATE and DELETE by trigger as well: a second fence behind the grants. TRUNCATE needs DROP, never granted. */
async function guardAppendOnlyTables(db: Db): Promise<void> {
  for (const table of appendOnlyTables()) {
    for (const verb of ['UPDATE', 'DELETE']) {
      await db.raw(
        `CREATE OR REPLACE TRIGGER ${table}_no_${verb.toLowerCase()} BEFORE ${verb} ON ${table} FOR EACH ROW
         SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = '${table} is append-only'`,
      );
    }
  }
}

async function grantTables(db: Db, app: AppUser): Promise<void> {
  const account = `${quote(app.user)}@${quote(app.host)}`;
  const present = await rawRows<{ table_name: string; privileges: string | null }>(
    db,
    `SELECT t.table_name AS table_name, GROUP_CONCAT(p.privilege_type ORDER BY p.privilege_type) AS privileges
     FROM information_schema.tables t
     LEFT JOIN information_schema.table_privileges p
       ON p.table_schema = t.table_schema AND p.table_name = t.table_name AND p.grantee = ?
     WHERE t.table_schema = DATABASE() AND t.table_type = 'BASE TABLE' GROUP BY t.table_name`,
    [account],
  );
  for (const [table, use] of Object.entries(TABLE_USES)) {
    const held = present.find((row) => row.table_name === table);
    if (!held) throw new Error(`The list of grants names a table that is not there: ${table}`);
    if (held.privileges) await db.raw(`REVOKE ALL PRIVILEGES ON ${table} FROM ${account}`);
    await db.raw(`GRANT ${privilegesOf(use).join(', ')} ON ${table} TO ${account}`);
  }
  const unlisted = present.filter(
    (row) => !(row.table_name in TABLE_USES) && !row.table_name.startsWith('knex_'),
  );
  if (unlisted.length > 0) {
    throw new Error(
      `Tables without a line in the list of grants: ${unlisted.map((row) => row.table_name).join(', ')}`,
    );
  }
}

function quote(text: string): string {
  return `'${text.replaceAll("'", "''")}'`;
}
