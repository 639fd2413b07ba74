import type { CostBook } from '#domain/pricing/costs';
import type { PriceBook } from '#domain/pricing/index';
import type { ClinicDate } from '#domain/time/index';
import type { Db, Trx } from '#server/platform/db';
import { refused } from '#server/platform/problem';
import { bookById, bookRowInForce } from './book-repository.ts';

/** A version of the price book as other features use it. */
export interface BookInForce {
  readonly priceBookId: number;
  readonly versionNo: number;
  readonly book: PriceBook;
}

/**
 * The book a site quotes from on a day.
 * @throws Problem refused 'no_price_book'
 */
export async function bookInForce(trx: Db | Trx, siteId: number, day: ClinicDate): Promise<BookInForce> {
  const row = await bookRowInForce(trx, siteId, day);
  if (!row)
    throw refused('no_price_book', 'No price book is in force here yet. The manager puts one in force.');
  return { priceBookId: row.priceBookId, versionNo: row.versionNo, book: row.book };
}

/** A version by its key, in force or not; undefined when there is none. */
export async function priceBookOf(trx: Db | Trx, priceBookId: number): Promise<BookInForce | undefined> {
  const row = await bookById(trx, priceBookId);
  return row ? { priceBookId: row.priceBookId, versionNo: row.versionNo, book: row.book } : undefined;
}

/** What the rules of a version cost the clinic; for the server's own reckoning. */
export async function costsOf(trx: Db | Trx, priceBookId: number): Promise<CostBook | undefined> {
  return (await bookById(trx, priceBookId))?.costs;
}
