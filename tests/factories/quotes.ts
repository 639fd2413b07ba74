import { createPatient as createPatientContract, type PatientView } from '#contract/patients';
import { createQuote, getQuote, issueQuote, type QuoteView, saveDraft } from '#contract/quotes';
import type { PriceBook } from '#domain/pricing/index';
import type { OptionDraft, QuoteDraft } from '#domain/quotes/index';
import { dayOf, type Instant } from '#domain/time/index';
import { demoCostBook, demoPriceBook } from '#seeds/price-book';
import type { AppDeps } from '#server/app';
import { createDraft, putInForce } from '#server/features/catalogue/index';
import { approvePlan, recordPrescription } from '#server/features/patients/index';
import { rawRows } from '#server/platform/db';
import type { Agent } from '#tests/support/agent';
import { makeUser, type TestUser, unique } from './house.ts';

/** Puts a book in force at a site, the demo's unless told otherwise; returns its key. */
export async function putBookInForce(
  deps: AppDeps,
  siteId: number,
  book: PriceBook = demoPriceBook,
): Promise<number> {
  const { actor } = await makeUser(deps, ['manager'], [siteId]);
  const priceBookId = await createDraft(deps, { siteId, file: { book, costs: demoCostBook } }, actor);
  const [row] = await rawRows<{ content_hash: string }>(
    deps.db,
    'SELECT content_hash FROM price_books WHERE price_book_id = ?',
    [priceBookId],
  );
  const inForceOn = dayOf(deps.clock.now() as Instant, 'Europe/Dublin');
  await putInForce(deps, priceBookId, { contentHash: row?.content_hash ?? '', inForceOn }, actor);
  return priceBookId;
}

/** A patient nobody else has, taken up by somebody of the site. */
export async function makePatient(
  agent: Agent,
  siteId: number,
  overrides: { readonly email?: string | null; readonly givenName?: string; readonly bornOn?: string } = {},
): Promise<PatientView> {
  const familyName = unique('Quill');
  return await agent.call(createPatientContract, {
    body: {
      siteId,
      givenName: overrides.givenName ?? 'Mara',
      familyName,
      bornOn: overrides.bornOn ?? '1996-06-14',
      email: overrides.email === undefined ? `${familyName}@test.example`.toLowerCase() : overrides.email,
      phone: null,
    },
  });
}

/** The eyes of the drawn quote, and a plan of the surgeon for them. */
export async function prepareEyes(
  deps: AppDeps,
  patientId: number,
  surgeon: TestUser,
  counsellor: TestUser,
): Promise<void> {
  const refractedOn = dayOf(deps.clock.now() as Instant, 'Europe/Dublin');
  await recordPrescription(
    deps,
    patientId,
    {
      refractedOn,
      OD: { sphere: '-2.00', cylinder: '-1.50', axis: '75', vertex: '' },
      OS: { sphere: '-2.75', cylinder: '-0.50', axis: '110', vertex: '' },
    },
    counsellor.actor,
  );
  await approvePlan(
    deps,
    patientId,
    { OD: ['lenticule-extraction'], OS: ['surface-ablation'], expiresOn: undefined },
    surgeon.actor,
  );
}

/** Begins a quote and saves it with one option changed as a test wants it. */
export async function draftQuote(
  agent: Agent,
  patientId: number,
  option: Partial<OptionDraft> = {},
): Promise<QuoteView> {
  const begun = await agent.call(createQuote, { body: { patientId } });
  if (!begun.draft) throw new Error('A new quote has a draft');
  const draft: QuoteDraft = {
    ...begun.draft,
    options: begun.draft.options.map((each) => ({ ...each, ...option })),
  };
  return await rewrite(agent, begun, draft);
}

/** Saves another draft over the one a quote has. */
export async function rewrite(agent: Agent, quote: QuoteView, draft: QuoteDraft): Promise<QuoteView> {
  await agent.call(saveDraft, {
    params: { quoteId: quote.quoteId },
    body: { draft: draft as NonNullable<QuoteView['draft']>, draftVersion: quote.draftVersion },
  });
  return await agent.call(getQuote, { params: { quoteId: quote.quoteId } });
}

/** What "send" hands in: the totals and hashes the sheet showed. */
export function asSeen(quote: QuoteView) {
  return quote.prices.map((price) => {
    if (!price.ok) throw new Error(price.refusals.map((refusal) => refusal.words).join(' '));
    return { totalMinor: price.totalMinor, contentHash: price.contentHash };
  });
}

export async function issue(agent: Agent, quote: QuoteView, withoutMail = false): Promise<QuoteView> {
  return await agent.call(issueQuote, {
    params: { quoteId: quote.quoteId },
    body: { draftVersion: quote.draftVersion, options: asSeen(quote), withoutMail },
  });
}
