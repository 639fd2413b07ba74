import { currencyCode } from '#domain/money/index';
import type { CostBook } from '#domain/pricing/costs';
import { type PriceBook, validatePriceBook } from '#domain/pricing/index';
import { type ClinicDate, formatDay } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { rawRows, sqlInstant, type Trx } from '#server/platform/db';
import { isDuplicate } from '#server/platform/db-errors';
import type { Deps } from '#server/platform/deps';
import { conflict, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import {
  type BookRow,
  bookHash,
  bookRowInForce,
  commonBookInForce,
  insertDraft,
  lockBook,
  updateDraft,
} from './book-repository.ts';

const NO_COSTS: CostBook = { perEyeMinor: {}, addOnMinor: {}, lender: {} };

/** Begins a draft from a file, or as a copy of what is in force. Returns its key. */
export async function createDraft(
  deps: Deps,
  wanted: {
    readonly siteId: number | null;
    readonly file?: { readonly book: PriceBook; readonly costs: CostBook | undefined };
  },
  actor: StaffActor,
): Promise<number> {
  return await inTransaction(deps.db, async (trx) => {
    if (wanted.siteId !== null) mustWorkAt(actor, wanted.siteId, 'site');
    const clinic = await clinicOf(trx);
    const source = wanted.file ?? (await copyOfBookInForce(trx, deps, wanted.siteId, actor));
    mustBeInCurrency(source.book, clinic.currency);
    try {
      const priceBookId = await insertDraft(trx, {
        clinicId: clinic.clinic_id,
        siteId: wanted.siteId,
        book: source.book,
        costs: source.costs ?? NO_COSTS,
        createdBy: actor.userId,
        createdAt: sqlInstant(deps.clock.now()),
      });
      await note(trx, deps, actor, 'price_book.drafted', priceBookId, {
        from: wanted.file ? 'file' : 'book',
      });
      return priceBookId;
    } catch (error) {
      if (isDuplicate(error, 'price_books_version'))
        throw conflict('version_taken', 'Somebody began a draft at the same moment. Please try again.');
      throw error;
    }
  });
}

async function copyOfBookInForce(
  trx: Trx,
  deps: Deps,
  siteId: number | null,
  actor: StaffActor,
): Promise<{ book: PriceBook; costs: CostBook }> {
  const today = await todayOf(trx, deps, actor);
  const row =
    siteId === null ? await commonBookInForce(trx, today) : await bookRowInForce(trx, siteId, today);
  if (!row) throw refused('no_price_book', 'No price book is in force to begin from. Import one as a file.');
  return { book: row.book, costs: row.costs };
}

/** Replaces a draft that is still what the person read. */
export async function saveDraftBook(
  deps: Deps,
  priceBookId: number,
  change: { readonly contentHash: string; readonly book: PriceBook; readonly costs: CostBook },
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const row = await draftFor(trx, priceBookId, change.contentHash, actor);
    mustBeInCurrency(change.book, row.currency);
    const book = { ...change.book, version: row.versionNo };
    await updateDraft(trx, priceBookId, book, change.costs);
    await note(trx, deps, actor, 'price_book.saved', priceBookId, {
      contentHash: bookHash(book, change.costs),
    });
  });
}

/**
 * Puts a draft in force from today or later. It must hold no error; notices are let through.
 * @throws Problem refused 'book_has_errors' naming each field, 'in_force_in_the_past'
 */
export async function putInForce(
  deps: Deps,
  priceBookId: number,
  wanted: { readonly contentHash: string; readonly inForceOn: ClinicDate },
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const row = await draftFor(trx, priceBookId, wanted.contentHash, actor);
    const today = await todayOf(trx, deps, actor);
    if (wanted.inForceOn < today) {
      throw refused(
        'in_force_in_the_past',
        `Quotes have been made since ${formatDay(wanted.inForceOn)}. Choose today or a later day.`,
        'inForceOn',
      );
    }
    const book = { ...row.book, inForceFrom: wanted.inForceOn };
    const errors = validatePriceBook(book).filter((finding) => finding.severity === 'error');
    if (errors.length > 0) {
      throw new Problem('refused', {
        reason: 'book_has_errors',
        detail: `This draft has ${errors.length === 1 ? 'an error' : `${errors.length} errors`}. It stays a draft.`,
        fields: errors.map(({ field, words, change }) => ({
          field: `book.${field}`,
          message: `${words} ${change}`,
        })),
      });
    }
    await updateDraft(trx, priceBookId, book, row.costs, wanted.inForceOn);
    await note(trx, deps, actor, 'price_book.in_force', priceBookId, { inForceOn: wanted.inForceOn });
  });
}

async function draftFor(
  trx: Trx,
  priceBookId: number,
  contentHash: string,
  actor: StaffActor,
): Promise<BookRow> {
  const row = await lockBook(trx, priceBookId);
  if (!row) throw notFound('price book');
  if (row.siteId !== null) mustWorkAt(actor, row.siteId, 'price book');
  if (row.state !== 'draft')
    throw refused('book_is_fixed', 'This version is in force and never changes. Begin a draft from it.');
  if (row.contentHash !== contentHash)
    throw conflict('draft_changed', 'Somebody else changed this draft. Read it again; nothing was saved.');
  return row;
}

function mustBeInCurrency(book: PriceBook, currency: string): void {
  if (book.currency !== currency)
    throw refused(
      'other_currency',
      `The clinic keeps its books in ${currency}, this price book is in ${book.currency}.`,
      'book.currency',
    );
}

async function clinicOf(trx: Trx): Promise<{ clinic_id: number; currency: string }> {
  const [clinic] = await rawRows<{ clinic_id: number; currency: string }>(
    trx,
    'SELECT clinic_id, currency FROM clinics ORDER BY clinic_id LIMIT 1',
  );
  if (!clinic) throw notFound('clinic');
  return { clinic_id: clinic.clinic_id, currency: currencyCode(clinic.currency) };
}

/** A clinic's sites share their book; the day is that of the manager's first site. */
async function todayOf(trx: Trx, deps: Deps, actor: StaffActor): Promise<ClinicDate> {
  const [siteId] = actor.siteIds;
  if (siteId === undefined) throw notFound('site');
  return await todayAt(trx, deps, siteId);
}

async function note(
  trx: Trx,
  deps: Deps,
  actor: StaffActor,
  action: string,
  priceBookId: number,
  after: unknown,
): Promise<void> {
  await recordAudit(trx, deps, { actor, action, subjectType: 'price_book', subjectId: priceBookId, after });
}
