import type { Knex } from 'knex';

/** Runs a migration's statements in order; each is one plain SQL text, so that names of constraints are ours. */
export async function runStatements(db: Knex, statements: readonly string[]): Promise<void> {
  for (const statement of statements) await db.raw(statement);
}
