import type { BookChangeView, BookSummary, PriceBookView } from '#contract/catalogue';
import { diffPriceBooks, validatePriceBook } from '#domain/pricing/index';
import type { ClinicDate } from '#domain/time/index';
import { todayAt } from '#server/features/business-days/index';
import { hasRole, type StaffActor } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { notFound, refused } from '#server/platform/problem';
import { allBooks, type BookRow } from './book-repository.ts';

type ReadDeps = Pick<Deps, 'db' | 'clock'>;

/** Every version somebody may see: the common ones and those of own sites. */
export async function readBooks(deps: ReadDeps, actor: StaffActor): Promise<BookSummary[]> {
  const { rows, today } = await visibleBooks(deps, actor);
  return rows.map((row) => summary(row, rows, today));
}

/** One version with its findings; costs for managers and auditors only. */
export async function readBook(
  deps: ReadDeps,
  priceBookId: number,
  actor: StaffActor,
): Promise<PriceBookView> {
  const { rows, today } = await visibleBooks(deps, actor);
  const row = rows.find((each) => each.priceBookId === priceBookId);
  if (!row) throw notFound('price book');
  return {
    ...summary(row, rows, today),
    book: row.book as PriceBookView['book'],
    costs: hasRole(actor, 'manager', 'auditor') ? row.costs : null,
    findings: validatePriceBook(row.book),
  };
}

/** What a version changes against another, by default the one in force for the same sites. */
export async function compareBooks(
  deps: ReadDeps,
  priceBookId: number,
  against: number | undefined,
  actor: StaffActor,
): Promise<{ against: BookSummary; changes: BookChangeView[] }> {
  const { rows, today } = await visibleBooks(deps, actor);
  const row = rows.find((each) => each.priceBookId === priceBookId);
  if (!row) throw notFound('price book');
  const other =
    against === undefined
      ? (inForce(rows, row.siteId, today) ?? inForce(rows, null, today))
      : rows.find((each) => each.priceBookId === against);
  if (!other) {
    if (against !== undefined) throw notFound('price book');
    throw refused('no_price_book', 'No price book is in force to compare with.');
  }
  const changes = diffPriceBooks(other.book, row.book);
  return {
    against: summary(other, rows, today),
    changes: changes.map((change) => ({ ...change, fields: [...change.fields] })),
  };
}

async function visibleBooks(
  deps: ReadDeps,
  actor: StaffActor,
): Promise<{ rows: BookRow[]; today: ClinicDate }> {
  const [siteId] = actor.siteIds;
  if (siteId === undefined) throw notFound('price book');
  const today = await todayAt(deps.db, deps, siteId);
  const rows = (await allBooks(deps.db)).filter(
    (row) => row.siteId === null || actor.siteIds.includes(row.siteId),
  );
  return { rows, today };
}

function inForce(rows: readonly BookRow[], siteId: number | null, today: ClinicDate): BookRow | undefined {
  return rows
    .filter((row) => row.state === 'in_force' && row.siteId === siteId && (row.inForceOn ?? today) <= today)
    .sort((a, b) => ((a.inForceOn ?? '') < (b.inForceOn ?? '') ? 1 : -1) || b.versionNo - a.versionNo)[0];
}

function summary(row: BookRow, rows: readonly BookRow[], today: ClinicDate): BookSummary {
  return {
    priceBookId: row.priceBookId,
    versionNo: row.versionNo,
    standing: standingOf(row, rows, today),
    siteId: row.siteId,
    currency: row.currency,
    inForceOn: row.inForceOn,
    createdBy: row.createdBy,
    createdAt: row.createdAt,
    contentHash: row.contentHash,
  };
}

function standingOf(row: BookRow, rows: readonly BookRow[], today: ClinicDate): BookSummary['standing'] {
  if (row.state === 'draft') return 'draft';
  if ((row.inForceOn ?? today) > today) return 'waiting';
  return inForce(rows, row.siteId, today)?.priceBookId === row.priceBookId ? 'in_force' : 'superseded';
}
