import { useMemo } from 'react';
import type { QuoteView } from '#contract/quotes';
import { compilePriceBook, type PriceBook, type QuoteResult } from '#domain/pricing/index';
import { priceOption, type QuoteDraft, type QuoteFacts } from '#domain/quotes/index';

/** Every option priced here and now by the engine the server has too. */
export function usePrices(quote: QuoteView, draft: QuoteDraft, book: PriceBook): readonly QuoteResult[] {
  const compiled = useMemo(() => compilePriceBook(book), [book]);
  const facts = useMemo<QuoteFacts>(() => quoteFacts(quote), [quote]);
  return useMemo(
    () => draft.options.map((option) => priceOption(draft, option, facts, compiled)),
    [draft, facts, compiled],
  );
}

/** What the server says a price depends on beside the draft. */
export function quoteFacts({ plan, today }: QuoteView): QuoteFacts {
  return {
    quotedOn: today,
    approvedPlan: plan
      ? {
          approvedBy: plan.surgeonName,
          approvedOn: plan.approvedOn,
          expiresOn: plan.expiresOn,
          procedureIds: { OD: plan.procedureIds.OD, OS: plan.procedureIds.OS },
        }
      : null,
  };
}
