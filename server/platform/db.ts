import knex, { type Knex } from 'knex';
import { type Minor, minor } from '#domain/money/index';
import type { Instant } from '#domain/time/index';

/** A pool of connections. Repositories never take it: they take a Trx. */
export type Db = Knex;
/** An open transaction; the first argument of every repository function. */
export type Trx = Knex.Transaction;

interface TypeCastField {
  readonly type: string;
  string(): string | null;
}

/** DATETIME arrives as an Instant, DATE as 'YYYY-MM-DD'; everything else as mysql2 gives it. */
function castField(field: TypeCastField, next: () => unknown): unknown {
  if (field.type === 'DATETIME' || field.type === 'TIMESTAMP') {
    const text = field.string();
    return text === null
      ? null
      : `${text
          .replace(' ', 'T')
          .padEnd(19, '0')
          .padEnd(text.length > 19 ? 23 : 19, '0')}${text.length > 19 ? '' : '.000'}Z`;
  }
  if (field.type === 'DATE') return field.string();
  return next();
}

/** Opens a pool on a mysql:// URL. Nothing is sent until the first query. */
export function openDatabase(url: string, pool: { min: number; max: number } = { min: 0, max: 10 }): Db {
  const at = new URL(url);
  const connection = {
    host: at.hostname,
    port: Number(at.port === '' ? 3306 : at.port),
    user: decodeURIComponent(at.username),
    password: decodeURIComponent(at.password),
    database: at.pathname.slice(1),
    timezone: 'Z',
    supportBigNumbers: true,
    // JSON arrives as its text on every server, MariaDB's extended metadata or not.
    jsonStrings: true,
    typeCast: castField,
  };
  return knex({ client: 'mysql2', connection, pool, acquireConnectionTimeout: 10_000 });
}

/** An Instant as MariaDB takes it for a DATETIME(3) column. */
export function sqlInstant(at: Instant): string {
  return at.replace('T', ' ').replace('Z', '');
}

/** The one reader of sums and BIGINTs: mysql2 gives SUM() as text, an empty SUM() as null. */
export function readMinor(value: unknown): Minor {
  if (value === null || value === undefined) return minor(0);
  if (typeof value === 'number') return minor(value);
  if (typeof value === 'string' && /^-?\d+(\.0+)?$/.test(value)) return minor(Number(value.split('.')[0]));
  throw new RangeError(`Not a whole number from the database: ${String(value)}`);
}

/** The rows of a raw SELECT. */
export async function rawRows<Row>(
  trx: Db | Trx,
  sql: string,
  bindings: readonly unknown[] = [],
): Promise<Row[]> {
  const [rows] = (await trx.raw(sql, bindings as Knex.RawBinding[])) as [Row[], unknown];
  return rows;
}

/** Inserts one row and returns its AUTO_INCREMENT key. */
export async function insertRow(
  trx: Trx,
  table: string,
  row: Readonly<Record<string, unknown>>,
): Promise<number> {
  const [id] = await trx(table).insert(row);
  return id as number;
}
