import * as contract from '#contract/quotes';
import { todayAt } from '#server/features/business-days/index';
import { bookInForce } from '#server/features/catalogue/index';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { acceptQuote } from './accept-quote.ts';
import { createQuote } from './create-quote.ts';
import { askDiscountApproval } from './discount-approval.ts';
import { issueQuote } from './issue-quote.ts';
import { priceOptions, quoteFacts } from './price-options.ts';
import { revokeQuoteLinks, sendQuoteAgain } from './quote-links.ts';
import { readQuotes } from './quote-list-read.ts';
import { quoteOf } from './quote-repository.ts';
import { draftPrices, pricedWire, readQuote } from './quotes-read.ts';
import { saveDraft, setNextContact } from './save-draft.ts';
import { withdrawQuote } from './withdraw-quote.ts';

export function quotesRoutes(deps: Deps): BoundRoute[] {
  return [...draftRoutes(deps), ...lifeRoutes(deps)];
}

function draftRoutes(deps: Deps): BoundRoute[] {
  return [
    route(contract.listQuotes, async ({ query, actor }) => {
      const { state, counsellor, patient, siteId, q, contactBy } = query;
      return await readQuotes(deps, { state, counsellor, patient, siteId, q, contactBy }, actor);
    }),
    route(contract.createQuote, async ({ body, actor }) => {
      return await readQuote(deps, await createQuote(deps, body.patientId, actor), actor);
    }),
    route(contract.getQuote, async ({ params, actor }) => await readQuote(deps, params.quoteId, actor)),
    route(contract.saveDraft, async ({ params, body, actor }) => {
      const saved = await saveDraft(deps, params.quoteId, body, actor);
      const quote = await quoteOf(deps.db, params.quoteId);
      if (!quote) throw notFound('quote');
      const today = await todayAt(deps.db, deps, quote.siteId);
      return { ...saved, prices: await draftPrices(deps, { ...quote, draft: body.draft }, today) };
    }),
    route(contract.priceDraft, async ({ params, body, actor }) => {
      const quote = await quoteOf(deps.db, params.quoteId);
      if (!quote) throw notFound('quote');
      mustWorkAt(actor, quote.siteId, 'quote');
      const today = await todayAt(deps.db, deps, quote.siteId);
      const { book } = await bookInForce(deps.db, quote.siteId, today);
      const { facts } = await quoteFacts(deps.db, quote.patientId, today);
      return { options: priceOptions(body.draft, facts, book).map(pricedWire) };
    }),
  ];
}

function lifeRoutes(deps: Deps): BoundRoute[] {
  return [
    route(contract.issueQuote, async ({ params, body, actor }) => {
      await issueQuote(deps, params.quoteId, body, actor);
      return await readQuote(deps, params.quoteId, actor);
    }),
    route(contract.askDiscountApproval, async ({ params, body, actor }) => {
      await askDiscountApproval(deps, params.quoteId, body, actor);
      return await readQuote(deps, params.quoteId, actor);
    }),
    route(contract.sendQuoteAgain, async ({ params, actor }) => {
      await sendQuoteAgain(deps, params.quoteId, actor);
      return await readQuote(deps, params.quoteId, actor);
    }),
    route(contract.revokeQuoteLinks, async ({ params, actor }) => {
      await revokeQuoteLinks(deps, params.quoteId, actor);
      return await readQuote(deps, params.quoteId, actor);
    }),
    route(contract.withdrawQuote, async ({ params, body, actor }) => {
      await withdrawQuote(deps, params.quoteId, body.reason, actor);
      return await readQuote(deps, params.quoteId, actor);
    }),
    route(contract.setNextContact, async ({ params, body, actor }) => {
      await setNextContact(deps, params.quoteId, body.nextContactOn, actor);
      return await readQuote(deps, params.quoteId, actor);
    }),
    route(contract.acceptQuoteAtDesk, async ({ params, body, actor }) => {
      const { signedForm, ...accepted } = body;
      await inTransaction(deps.db, (trx) =>
        acceptQuote(trx, deps, {
          quoteId: params.quoteId,
          ...accepted,
          ticks: [`Signed form: ${signedForm}`],
          channel: 'desk',
          actor,
        }),
      );
      return await readQuote(deps, params.quoteId, actor);
    }),
  ];
}
