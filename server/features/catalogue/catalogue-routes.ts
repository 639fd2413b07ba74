import {
  comparePriceBooks,
  createPriceBook,
  getPriceBook,
  getPricingBook,
  listPriceBooks,
  type PriceBookView,
  putPriceBookInForce,
  savePriceBook,
} from '#contract/catalogue';
import { todayAt } from '#server/features/business-days/index';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { bookInForce } from './book-in-force.ts';
import { compareBooks, readBook, readBooks } from './books-read.ts';
import { createDraft, putInForce, saveDraftBook } from './write-book.ts';

export function catalogueRoutes(deps: Deps): BoundRoute[] {
  return [
    route(listPriceBooks, async ({ actor }) => ({ books: await readBooks(deps, actor) })),
    route(getPricingBook, async ({ params, query, actor }) => {
      mustWorkAt(actor, params.siteId, 'site');
      const day = query.day ?? (await todayAt(deps.db, deps, params.siteId));
      const { book, ...version } = await bookInForce(deps.db, params.siteId, day);
      return { ...version, book: book as PriceBookView['book'] };
    }),
    route(getPriceBook, async ({ params, actor }) => await readBook(deps, params.priceBookId, actor)),
    route(createPriceBook, async ({ body, actor }) => {
      const wanted =
        body.from === 'file'
          ? { siteId: body.siteId, file: { book: body.book, costs: body.costs } }
          : { siteId: body.siteId };
      return await readBook(deps, await createDraft(deps, wanted, actor), actor);
    }),
    route(savePriceBook, async ({ params, body, actor }) => {
      await saveDraftBook(deps, params.priceBookId, body, actor);
      return await readBook(deps, params.priceBookId, actor);
    }),
    route(putPriceBookInForce, async ({ params, body, actor }) => {
      await putInForce(deps, params.priceBookId, body, actor);
      return await readBook(deps, params.priceBookId, actor);
    }),
    route(
      comparePriceBooks,
      async ({ params, query, actor }) => await compareBooks(deps, params.priceBookId, query.against, actor),
    ),
  ];
}
