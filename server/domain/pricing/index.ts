/**
 * Prices, and why. The one engine that browser, server, PDF and tests share; it knows nothing of what things cost the
 * clinic (see costs.ts, which only the server imports).
 *
 *   quoteCourse(input: CourseInput, book: PriceBook | CompiledPriceBook): QuoteResult
 *     → { ok: true, course: PricedCourse } | { ok: false, refusals: Refusal[] }
 *   compilePriceBook(book: PriceBook): CompiledPriceBook          once per version; look-ups do not grow with the book
 *   explainLine(line: QuoteLine, course: PricedCourse)   : Derivation    what the margin shows for a figure
 *   validatePriceBook(book: PriceBook): BookFinding[]             what is wrong with a draft, explained
 *   diffPriceBooks(a: PriceBook, b: PriceBook): BookChange[]      a draft against the book in force, rule by rule
 *   keptByLadder(ladder, {event, on, acceptedOn, surgeryOn, shareMinor}): Kept   what is kept of one eye
 *   priceEnhancement(cover, asked): EnhancementPrice              under cover or priced, each condition shown
 *   contentKey(input, book): string · canonicalJson(value): string    hash these to recognise the same quote
 *   annuityInstalment, annuityCharge, creditTerms, isInterestFreeExempt; aprMonthly, aprByDays, aprUnitPeriods
 */
export * from './apr.ts';
export * from './canonical-json.ts';
export { type CompiledPriceBook, compilePriceBook } from './compile.ts';
export * from './course.ts';
export {
  type CoverCondition,
  type EnhancementAsked,
  type EnhancementPrice,
  priceEnhancement,
} from './cover.ts';
export * from './credit.ts';
export * from './diff-books.ts';
export * from './explain.ts';
export type { BookFinding, BookFindingCode } from './finding.ts';
export { type CancellationEvent, type Kept, keptByLadder } from './ladder.ts';
export * from './price-book.ts';
export { contentKey, ENGINE_VERSION, quoteCourse } from './quote-course.ts';
export { rateOn } from './taxes.ts';
export { validatePriceBook } from './validate-book.ts';
