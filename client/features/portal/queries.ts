import { queryOptions } from '@tanstack/react-query';
import { call } from '#client/api/call.ts';
import { getMyQuote, type PatientQuote } from '#contract/portal';

/** The patient's own quote and course. */
export const myQuoteQuery = queryOptions({
  queryKey: ['my-quote'],
  queryFn: ({ signal }): Promise<PatientQuote> => call(getMyQuote, {}, signal),
});
