export { type BookInForce, bookInForce, costsOf, priceBookOf } from './book-in-force.ts';
export { catalogueRoutes } from './catalogue-routes.ts';
export { createDraft, putInForce } from './write-book.ts';
