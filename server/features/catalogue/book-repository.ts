import { createHash } from 'node:crypto';
import type { CurrencyCode } from '#domain/money/index';
import type { CostBook } from '#domain/pricing/costs';
import { canonicalJson, type PriceBook } from '#domain/pricing/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { type Db, insertRow, rawRows, type Trx } from '#server/platform/db';

export interface BookRow {
  readonly priceBookId: number;
  readonly clinicId: number;
  readonly siteId: number | null;
  readonly versionNo: number;
  readonly state: 'draft' | 'in_force';
  readonly currency: CurrencyCode;
  readonly inForceOn: ClinicDate | null;
  readonly book: PriceBook;
  readonly costs: CostBook;
  readonly contentHash: string;
  readonly createdBy: string;
  readonly createdAt: Instant;
}

interface StoredBook {
  price_book_id: number;
  clinic_id: number;
  site_id: number | null;
  version_no: number;
  state: BookRow['state'];
  currency: CurrencyCode;
  in_force_on: ClinicDate | null;
  content: string;
  costs: string;
  content_hash: string;
  created_by: string;
  created_at: Instant;
}

const COLUMNS = `b.price_book_id, b.clinic_id, b.site_id, b.version_no, b.state, b.currency, b.in_force_on, b.content, b.costs,
  b.content_hash, u.name AS created_by, b.created_at`;

/** Recognises the same prices and costs: what a draft that was read is held against before it is written over. */
export function bookHash(book: PriceBook, costs: CostBook): string {
  return createHash('sha256').update(canonicalJson({ book, costs })).digest('hex');
}

async function booksWhere(
  trx: Db | Trx,
  where: string,
  bindings: readonly (string | number)[],
): Promise<BookRow[]> {
  const rows = await rawRows<StoredBook>(
    trx,
    `SELECT ${COLUMNS} FROM price_books b JOIN users u ON u.user_id = b.created_by WHERE ${where}`,
    bindings,
  );
  return rows.map((row) => ({
    priceBookId: row.price_book_id,
    clinicId: row.clinic_id,
    siteId: row.site_id,
    versionNo: row.version_no,
    state: row.state,
    currency: row.currency,
    inForceOn: row.in_force_on,
    book: JSON.parse(row.content) as PriceBook,
    costs: JSON.parse(row.costs) as CostBook,
    contentHash: row.content_hash,
    createdBy: row.created_by,
    createdAt: row.created_at,
  }));
}

export async function bookById(trx: Db | Trx, priceBookId: number): Promise<BookRow | undefined> {
  return (await booksWhere(trx, 'b.price_book_id = ?', [priceBookId]))[0];
}

/** A draft or book, locked until the end of the transaction. */
export async function lockBook(trx: Trx, priceBookId: number): Promise<BookRow | undefined> {
  return (await booksWhere(trx, 'b.price_book_id = ? FOR UPDATE', [priceBookId]))[0];
}

/** Every version of the clinic, newest first. */
export async function allBooks(trx: Db | Trx): Promise<BookRow[]> {
  return await booksWhere(trx, '1 = 1 ORDER BY b.version_no DESC', []);
}

/**
 * The book a site quotes from on a day: its own where it has one, else the common one; of several the one that came into
 * force last.
 */
export async function bookRowInForce(
  trx: Db | Trx,
  siteId: number,
  day: ClinicDate,
): Promise<BookRow | undefined> {
  const [row] = await booksWhere(
    trx,
    `b.state = 'in_force' AND b.in_force_on <= ? AND (b.site_id = ? OR b.site_id IS NULL)
     AND b.clinic_id = (SELECT s.clinic_id FROM sites s WHERE s.site_id = ?)
     ORDER BY b.site_id IS NULL, b.in_force_on DESC, b.version_no DESC LIMIT 1`,
    [day, siteId, siteId],
  );
  return row;
}

/** The common book in force: what drafts for every site are compared with. */
export async function commonBookInForce(trx: Db | Trx, day: ClinicDate): Promise<BookRow | undefined> {
  const [row] = await booksWhere(
    trx,
    `b.state = 'in_force' AND b.in_force_on <= ? AND b.site_id IS NULL
     ORDER BY b.in_force_on DESC, b.version_no DESC LIMIT 1`,
    [day],
  );
  return row;
}

export interface NewBook {
  readonly clinicId: number;
  readonly siteId: number | null;
  readonly book: PriceBook;
  readonly costs: CostBook;
  readonly createdBy: number;
  /** As sqlInstant writes it. */
  readonly createdAt: string;
}

/**
 * Stores a draft under the next version number of the clinic; the book's own `version` becomes that number. The first book a clinic
 * brings keeps the number it comes with.
 */
export async function insertDraft(trx: Trx, draft: NewBook): Promise<number> {
  const [row] = await rawRows<{ last_no: number | null }>(
    trx,
    'SELECT MAX(version_no) AS last_no FROM price_books WHERE clinic_id = ? FOR UPDATE',
    [draft.clinicId],
  );
  const last = row?.last_no ?? null;
  const versionNo = last === null ? draft.book.version : last + 1;
  const book = { ...draft.book, version: versionNo };
  return await insertRow(trx, 'price_books', {
    clinic_id: draft.clinicId,
    site_id: draft.siteId,
    version_no: versionNo,
    state: 'draft',
    currency: book.currency,
    ...contentOf(book, draft.costs),
    created_by: draft.createdBy,
    created_at: draft.createdAt,
  });
}

/** Writes a draft's content; a book in force has no way here. */
export async function updateDraft(
  trx: Trx,
  priceBookId: number,
  book: PriceBook,
  costs: CostBook,
  inForceOn?: ClinicDate,
): Promise<void> {
  await trx('price_books')
    .where({ price_book_id: priceBookId, state: 'draft' })
    .update({
      ...contentOf(book, costs),
      currency: book.currency,
      ...(inForceOn === undefined ? {} : { state: 'in_force', in_force_on: inForceOn }),
    });
}

function contentOf(book: PriceBook, costs: CostBook): Record<string, string> {
  return {
    content: JSON.stringify(book),
    costs: JSON.stringify(costs),
    content_hash: bookHash(book, costs),
  };
}
