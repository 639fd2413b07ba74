import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { call } from '#client/api/call.ts';
import { getPricingBook } from '#contract/catalogue';
import type { ContractCall } from '#contract/define';
import {
  acceptQuoteAtDesk,
  askDiscountApproval,
  getQuote,
  issueQuote,
  listQuotes,
  type QuoteView,
  revokeQuoteLinks,
  sendQuoteAgain,
  setNextContact,
  withdrawQuote,
} from '#contract/quotes';

export type QuoteFilter = NonNullable<ContractCall<typeof listQuotes>['query']>;

export const quotesQuery = (filter: QuoteFilter) =>
  queryOptions({
    queryKey: ['quotes', filter],
    queryFn: ({ signal }) => call(listQuotes, { query: filter }, signal),
    placeholderData: (before) => before,
  });

export const quoteQuery = (quoteId: number) =>
  queryOptions({
    queryKey: ['quote', quoteId],
    queryFn: ({ signal }) => call(getQuote, { params: { quoteId } }, signal),
  });

/** The book the engine in the browser prices from; it never holds what things cost the clinic. */
export const pricingBookQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['pricing-book', siteId],
    queryFn: ({ signal }) => call(getPricingBook, { params: { siteId } }, signal),
    staleTime: 300_000,
  });

/** A step in a quote's life: the answer is the whole quote anew. */
function useQuoteStep<Input>(step: (input: Input) => Promise<QuoteView>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: step,
    onSuccess: async (quote) => {
      client.setQueryData(quoteQuery(quote.quoteId).queryKey, quote);
      await client.invalidateQueries({ queryKey: ['quotes'] });
      await client.invalidateQueries({ queryKey: ['patient', quote.patient.patientId] });
    },
  });
}

export const useIssueQuote = () =>
  useQuoteStep((input: ContractCall<typeof issueQuote>) => call(issueQuote, input));
export const useAskApproval = () =>
  useQuoteStep((input: ContractCall<typeof askDiscountApproval>) => call(askDiscountApproval, input));
export const useSendAgain = () =>
  useQuoteStep((quoteId: number) => call(sendQuoteAgain, { params: { quoteId }, body: {} }));
export const useRevokeLinks = () =>
  useQuoteStep((quoteId: number) => call(revokeQuoteLinks, { params: { quoteId } }));
export const useWithdrawQuote = () =>
  useQuoteStep((input: ContractCall<typeof withdrawQuote>) => call(withdrawQuote, input));
export const useNextContact = () =>
  useQuoteStep((input: ContractCall<typeof setNextContact>) => call(setNextContact, input));
export const useAcceptAtDesk = () =>
  useQuoteStep((input: ContractCall<typeof acceptQuoteAtDesk>) => call(acceptQuoteAtDesk, input));
