import { afterAll, beforeAll, describe, expect, test } from 'vitest';
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
import { minor } from '#domain/money/index';
import { instant } from '#domain/time/index';
import { demoCostBook, demoPriceBook } from '#seeds/price-book';
import { type SteppedClock, steppedClock } from '#server/platform/clock';
import { makeSite, makeUser, type TestSite } from '#tests/factories/house';
import type { Agent } from '#tests/support/agent';
import { type TestApp, testApp } from '#tests/support/test-app';

let app: TestApp;
let clock: SteppedClock;
let site: TestSite;
let manager: Agent;
let counsellor: Agent;
let auditor: Agent;
let elsewhere: Agent;

beforeAll(async () => {
  clock = steppedClock(instant('2026-03-12T09:42:00Z'));
  app = await testApp({ clock });
});

afterAll(() => app.stop());

/** Every test has a site, and so a book, of its own. */
async function newSite(): Promise<void> {
  site = await makeSite(app.deps);
  const other = await makeSite(app.deps);
  const as = async (role: 'manager' | 'counsellor' | 'auditor', siteId: number) =>
    await app.signIn((await makeUser(app.deps, [role], [siteId])).email);
  manager = await as('manager', site.siteId);
  counsellor = await as('counsellor', site.siteId);
  auditor = await as('auditor', site.siteId);
  elsewhere = await as('manager', other.siteId);
}

type WireBook = PriceBookView['book'];
const demo = demoPriceBook as WireBook;

async function importBook(book: WireBook = demo): Promise<PriceBookView> {
  return await manager.call(createPriceBook, {
    body: { from: 'file', siteId: site.siteId, book, costs: demoCostBook },
  });
}

async function inForce(draft: PriceBookView, inForceOn = '2026-03-12'): Promise<PriceBookView> {
  return await manager.call(putPriceBookInForce, {
    params: { priceBookId: draft.priceBookId },
    body: { contentHash: draft.contentHash, inForceOn },
  });
}

async function save(draft: PriceBookView, book: WireBook) {
  return await manager.tryCall(savePriceBook, {
    params: { priceBookId: draft.priceBookId },
    body: { contentHash: draft.contentHash, book, costs: draft.costs ?? demoCostBook },
  });
}

function dearer(book: WireBook): WireBook {
  const [first, ...rest] = book.procedures;
  if (!first) throw new Error('The book has no procedure');
  return { ...book, procedures: [{ ...first, priceMinor: minor(first.priceMinor + 5_000) }, ...rest] };
}

describe('price books', () => {
  beforeAll(newSite);

  test('a file, put in force · is what the site quotes from, and never changes again', async () => {
    const draft = await importBook();
    expect(draft).toMatchObject({ standing: 'draft', inForceOn: null });
    const book = await inForce(draft);
    expect(book).toMatchObject({ standing: 'in_force', inForceOn: '2026-03-12' });
    expect(book.book).toEqual({ ...demo, version: book.versionNo, inForceFrom: '2026-03-12' });
    const again = await save(book, dearer(book.book));
    expect([again.status, again.body.reason]).toEqual([422, 'book_is_fixed']);
    const params = { siteId: site.siteId };
    expect(await counsellor.call(getPricingBook, { params })).toEqual({
      priceBookId: book.priceBookId,
      versionNo: book.versionNo,
      book: book.book,
    });
  });

  test('a draft of the one in force · shows what it changes, and takes over on its day', async () => {
    const draft = await manager.call(createPriceBook, { body: { from: 'in_force', siteId: site.siteId } });
    const saved = await save(draft, dearer(draft.book));
    expect(saved.status).toBe(200);
    const params = { priceBookId: draft.priceBookId };
    const { changes, against } = await counsellor.call(comparePriceBooks, { params });
    expect(against.standing).toBe('in_force');
    expect(changes).toEqual([
      {
        change: 'changed',
        section: 'procedures',
        ruleId: 'lasik',
        label: 'LASIK',
        fields: [{ path: 'priceMinor', before: 240_000, after: 245_000 }],
      },
    ]);
    const next = await inForce(saved.body as PriceBookView, '2026-04-01');
    expect(next.standing).toBe('waiting');
    const priceOn = async (day: string) =>
      (await counsellor.call(getPricingBook, { params: { siteId: site.siteId }, query: { day } })).book
        .procedures[0]?.priceMinor;
    expect(await priceOn('2026-03-31')).toBe(240_000);
    expect(await priceOn('2026-04-01')).toBe(245_000);
    clock.set(instant('2026-04-01T09:00:00Z'));
    const later = await app.signIn((await makeUser(app.deps, ['auditor'], [site.siteId])).email);
    const { books } = await later.call(listPriceBooks, {});
    const standing = new Map(books.map((book) => [book.priceBookId, book.standing]));
    expect(standing.get(next.priceBookId)).toBe('in_force');
    expect(standing.get(against.priceBookId)).toBe('superseded');
    clock.set(instant('2026-03-12T09:42:00Z'));
  });

  test('two managers on one draft · the second is told', async () => {
    const draft = await importBook();
    expect((await save(draft, dearer(draft.book))).status).toBe(200);
    const stale = await save(draft, draft.book);
    expect([stale.status, stale.body.reason]).toEqual([409, 'draft_changed']);
  });

  test('a draft with errors · is kept, shows them, and does not come into force', async () => {
    const draft = await importBook({ ...demo, bands: [...demo.bands, ...demo.bands.slice(0, 1)] });
    const errors = draft.findings.filter((finding) => finding.severity === 'error');
    expect(errors.map((finding) => finding.code)).toContain('overlapping_bands');
    const answer = await manager.tryCall(putPriceBookInForce, {
      params: { priceBookId: draft.priceBookId },
      body: { contentHash: draft.contentHash, inForceOn: '2026-03-12' },
    });
    expect([answer.status, answer.body.reason]).toEqual([422, 'book_has_errors']);
    expect(answer.body.errors?.map((error) => error.field)).toEqual(
      errors.map((finding) => `book.${finding.field}`),
    );
  });

  test('a day gone by, or another currency · is refused', async () => {
    const draft = await importBook();
    const past = await manager.tryCall(putPriceBookInForce, {
      params: { priceBookId: draft.priceBookId },
      body: { contentHash: draft.contentHash, inForceOn: '2026-03-11' },
    });
    expect(past.body).toMatchObject({ reason: 'in_force_in_the_past', errors: [{ field: 'inForceOn' }] });
    const pounds = await manager.tryCall(createPriceBook, {
      body: { from: 'file', siteId: site.siteId, book: { ...demo, currency: 'GBP' } },
    });
    expect(pounds.body).toMatchObject({ reason: 'other_currency', errors: [{ field: 'book.currency' }] });
  });

  test('what things cost the clinic · managers and auditors see, nobody else, and the engine’s book never holds it', async () => {
    const { priceBookId } = await importBook();
    const costs = async (agent: Agent) => (await agent.call(getPriceBook, { params: { priceBookId } })).costs;
    expect(await costs(manager)).toEqual(demoCostBook);
    expect(await costs(auditor)).toEqual(demoCostBook);
    expect(await costs(counsellor)).toBeNull();
    const answer = await counsellor.send('GET', `/api/sites/${site.siteId}/price-book`);
    expect(answer.bytes.toString()).not.toMatch(/perEyeMinor|addOnMinor|costs/);
  });

  test('costs inside the book itself · are refused by name', async () => {
    const answer = await manager.send('POST', '/api/price-books', {
      from: 'file',
      siteId: site.siteId,
      book: { ...demo, costs: demoCostBook },
    });
    expect(answer.status).toBe(422);
    expect(JSON.stringify(answer.body)).toContain('costs');
  });

  test('another site’s book · is not there, and only managers write', async () => {
    const draft = await importBook();
    const params = { priceBookId: draft.priceBookId };
    expect((await elsewhere.tryCall(getPriceBook, { params })).status).toBe(404);
    expect((await elsewhere.tryCall(comparePriceBooks, { params })).status).toBe(404);
    const body = { contentHash: draft.contentHash, book: draft.book, costs: demoCostBook };
    expect((await elsewhere.tryCall(savePriceBook, { params, body })).status).toBe(404);
    expect((await elsewhere.tryCall(getPricingBook, { params: { siteId: site.siteId } })).status).toBe(404);
    expect((await counsellor.tryCall(savePriceBook, { params, body })).status).toBe(403);
    const { books } = await elsewhere.call(listPriceBooks, {});
    expect(books.map((book) => book.priceBookId)).not.toContain(draft.priceBookId);
  });
});
