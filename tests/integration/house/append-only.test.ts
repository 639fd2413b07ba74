import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { type Db, openDatabase, rawRows } from '#server/platform/db';
import { isDenied } from '#server/platform/db-errors';
import { appendOnlyTables, privilegesOf, TABLE_USES } from '#server/platform/table-grants';
import { type TestDatabase, testDatabase } from '#tests/support/test-database';

let database: TestDatabase;
let app: Db;

beforeAll(async () => {
  database = await testDatabase();
  app = openDatabase(database.appUrl, { min: 0, max: 2 });
});
afterAll(() => app.destroy());

describe('append-only tables (invariant 2)', () => {
  test.each(appendOnlyTables())(
    '%s · UPDATE, DELETE and TRUNCATE · are denied to the application',
    async (table) => {
      const [column] = await rawRows<{ name: string }>(
        app,
        'SELECT column_name AS name FROM information_schema.columns WHERE table_schema = DATABASE() AND table_name = ? LIMIT 1',
        [table],
      );
      for (const sql of [
        `UPDATE ${table} SET ${column?.name} = ${column?.name}`,
        `DELETE FROM ${table}`,
        `TRUNCATE TABLE ${table}`,
      ]) {
        const refusal = await app.raw(sql).then(
          () => undefined,
          (error: unknown) => error,
        );
        expect([sql, isDenied(refusal)]).toEqual([sql, true]);
      }
    },
  );

  test('each of them · has its two triggers, which refuse the owner too', async () => {
    const owner = openDatabase(database.ownerUrl, { min: 0, max: 1 });
    const triggers = await rawRows<{ n: number }>(
      owner,
      'SELECT COUNT(*) AS n FROM information_schema.triggers WHERE trigger_schema = DATABASE()',
    );
    await owner.destroy();
    expect(triggers[0]?.n).toBe(appendOnlyTables().length * 2);
  });
});

test('the application’s privileges · equal the generated list', async () => {
  const rows = await rawRows<{ table_name: string; privilege_type: string }>(
    app,
    'SELECT table_name AS table_name, privilege_type AS privilege_type FROM information_schema.table_privileges WHERE table_schema = DATABASE() AND grantee = ?',
    [`'${database.name}_app'@'127.0.0.1'`],
  );
  const held = Object.fromEntries(
    [...new Set(rows.map((row) => row.table_name))].sort().map((table) => [
      table,
      rows
        .filter((row) => row.table_name === table)
        .map((row) => row.privilege_type)
        .sort(),
    ]),
  );
  const listed = Object.fromEntries(
    Object.entries(TABLE_USES)
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([table, use]) => [table, [...privilegesOf(use)].sort()]),
  );
  expect(held).toEqual(listed);
});

test('every table · is named in the plural and has its constraints named', async () => {
  const tables = await rawRows<{ name: string }>(
    app,
    "SELECT table_name AS name FROM information_schema.tables WHERE table_schema = DATABASE() AND table_name NOT LIKE 'knex%'",
  );
  expect(tables.length).toBeGreaterThan(30);
  expect(tables.map((row) => row.name).filter((name) => !/^[a-z]+(_[a-z]+)*(s|series)$/.test(name))).toEqual(
    [],
  );
  const unnamed = await rawRows<{ name: string }>(
    app,
    "SELECT CONCAT(table_name, '.', constraint_name) AS name FROM information_schema.referential_constraints WHERE constraint_schema = DATABASE() AND constraint_name LIKE '%ibfk%'",
  );
  expect(unnamed).toEqual([]);
});
