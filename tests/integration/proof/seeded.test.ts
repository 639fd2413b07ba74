import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { accountOf, journalText } from '#domain/ledger/index';
import { currencyCode, plainAmount } from '#domain/money/index';
import { dayOf, instantOfMs } from '#domain/time/index';
import { ZONE } from '#seeds/clinic';
import { anchorFor, seedDemo } from '#seeds/demo';
import { SEALED_TABLES, verifyChain } from '#server/features/audit/index';
import { accountTotals } from '#server/features/ledger/index';
import { readJournalEntries } from '#server/features/ledger/journal-read';
import { computeProof } from '#server/features/proof/index';
import { type SteppedClock, steppedClock } from '#server/platform/clock';
import { rawRows } from '#server/platform/db';
import { type TestApp, testApp } from '#tests/support/test-app';
import { freshDatabase, type TestDatabase } from '#tests/support/test-database';
import { type TestStripe, testStripe } from '#tests/support/test-stripe';

let database: TestDatabase;
let stripe: TestStripe;
let app: TestApp;
const now = instantOfMs(Math.floor(Date.now() / 1000) * 1000);
const clock: SteppedClock = steppedClock(now);

beforeAll(async () => {
  database = await freshDatabase('seeded');
  stripe = await testStripe();
  app = await testApp({ database, stripeUrl: stripe.apiUrl, clock });
  const processor = {
    setClock: async (at: string) => {
      await stripe.control.setClock(at, { frozen: true });
    },
    pay: async (sessionId: string) => {
      await stripe.control.pay(sessionId);
    },
  };
  await seedDemo({ ...app.deps, clock }, processor, {
    anchor: anchorFor(dayOf(now, ZONE)),
    now,
    password: 'lantern-quay-demo',
  });
}, 120_000);
afterAll(async () => {
  await app.stop();
  await stripe.stop();
});

describe('the seeded clinic', () => {
  test('every control · ties, and looked at something', async () => {
    const proof = await computeProof(app.deps, undefined);
    expect(proof.controls.filter((control) => !control.tied)).toEqual([]);
    expect(proof.controls.length).toBeGreaterThan(12);
    expect(proof.controls.filter((control) => control.checked === 0).map((control) => control.id)).toEqual(
      [],
    );
  });

  test('as of an earlier day · it ties too', async () => {
    const [day] = await rawRows<{ day_on: never }>(
      app.deps.db,
      "SELECT MIN(day_on) + INTERVAL 14 DAY AS day_on FROM business_days WHERE state = 'closed'",
    );
    const proof = await computeProof(app.deps, day?.day_on);
    expect(proof.controls.filter((control) => !control.tied)).toEqual([]);
  });

  test('the exported journal · passes hledger’s strict check and its balances are our trial balance (hledger, Debian package)', async () => {
    const siteIds = (await rawRows<{ site_id: number }>(app.deps.db, 'SELECT site_id FROM sites')).map(
      (row) => row.site_id,
    );
    const text = journalText(await readJournalEntries(app.deps.db, { siteIds }), currencyCode('EUR'));
    const folder = mkdtempSync(path.join(tmpdir(), 'tl-journal-'));
    const file = path.join(folder, 'books.journal');
    writeFileSync(file, text);
    execFileSync('hledger', ['-f', file, 'check', '--strict']);
    const csv = execFileSync('hledger', ['-f', file, 'balance', '--flat', '--no-total', '-O', 'csv'], {
      encoding: 'utf8',
    });
    rmSync(folder, { recursive: true });
    const theirs = new Map<string, bigint>();
    for (const line of csv.trim().split('\n').slice(1)) {
      const match = /^"[^"]*?:(\d{4}) [^"]*","(-?[\d.]+) EUR"$/.exec(line);
      if (!match) throw new Error(`Not understood: ${line}`);
      const [, code = '', amount = ''] = match;
      theirs.set(code, (theirs.get(code) ?? 0n) + BigInt(amount.replace('.', '')));
    }
    const ours = await accountTotals(app.deps.db, siteIds, '9999-12-31' as never);
    const shown = new Map(
      ours
        .filter((row) => row.totalMinor !== 0)
        .map((row) => [
          row.account,
          BigInt(plainAmount(row.totalMinor, currencyCode('EUR')).replace('.', '')),
        ]),
    );
    expect(ours.every((row) => accountOf(row.account) !== undefined)).toBe(true);
    expect(Object.fromEntries([...theirs].filter(([, amount]) => amount !== 0n))).toEqual(
      Object.fromEntries(shown),
    );
  });
});

/** Another value of a column's kind, as SQL over the old one. */
function spoiled(column: string, type: string): string {
  if (/int|decimal/.test(type)) return `COALESCE(${column}, 0) + 1`;
  if (/date/.test(type)) return `COALESCE(${column}, '2020-01-01') + INTERVAL 1 DAY`;
  if (type === 'char' && column === 'eye') return `IF(${column} = 'OX', 'OY', 'OX')`;
  if (type === 'binary') return 'REVERSE(values_digest)';
  return `IF(${column} = 'ZZZ', 'YYY', 'ZZZ')`;
}

describe('a single changed column, made as the database’s root', () => {
  const cases = SEALED_TABLES.flatMap((table) => [
    ...table.columns.map((column) => [table.table, column, table.table, table.key, ''] as const),
    ...(table.children?.columns ?? [])
      .filter(
        (column) =>
          !column.endsWith('_id') || column === 'course_id' || column === 'till_id' || column === 'payee_id',
      )
      .map(
        (column) =>
          [table.children?.table ?? '', column, table.table, table.key, table.children?.order ?? ''] as const,
      ),
  ]);

  test.each(cases)('%s.%s · is named by the chain', async (table, column, parent, key, order) => {
    const [meta] = await rawRows<{ type: string }>(
      app.deps.db,
      'SELECT data_type AS type FROM information_schema.columns WHERE table_schema = DATABASE() AND table_name = ? AND column_name = ?',
      [table, column],
    );
    const [row] = await rawRows<{ id: number }>(app.deps.db, `SELECT MAX(${key}) AS id FROM ${table}`);
    if (!row) throw new Error(`${table} holds nothing to spoil`);
    const unguarded = `SET foreign_key_checks = 0; SET check_constraint_checks = 0; SET unique_checks = 0; DROP TRIGGER IF EXISTS ${table}_no_update;`;
    const one = table === parent ? `${key} = ${row.id}` : `${key} = ${row.id} ORDER BY ${order} DESC LIMIT 1`;
    database.asRoot(
      `${unguarded} DROP TABLE IF EXISTS kept; CREATE TABLE kept AS SELECT * FROM ${table} WHERE ${key} = ${row.id}; UPDATE ${table} SET ${column} = ${spoiled(column, meta?.type ?? '')} WHERE ${one};`,
    );
    const { findings } = await verifyChain(app.deps.db, '1970-01-01 00:00:00');
    database.asRoot(
      `${unguarded} DROP TRIGGER IF EXISTS ${table}_no_delete; REPLACE INTO ${table} (${(await columnsOf(table)).join(', ')}) SELECT ${(await columnsOf(table)).join(', ')} FROM kept; DROP TABLE kept;`,
    );
    expect(findings.map((finding) => [finding.table, finding.id])).toEqual([[parent, row.id]]);
    expect((await verifyChain(app.deps.db, '1970-01-01 00:00:00')).findings).toEqual([]);
  });

  async function columnsOf(table: string): Promise<string[]> {
    const rows = await rawRows<{ name: string }>(
      app.deps.db,
      'SELECT column_name AS name FROM information_schema.columns WHERE table_schema = DATABASE() AND table_name = ? AND generation_expression IS NULL',
      [table],
    );
    return rows.map((row) => row.name);
  }
});
