import { useQuery } from '@tanstack/react-query';
import { useParams, useSearchParams } from 'react-router-dom';
import { useSession } from '#client/api/session.ts';
import { Page } from '#client/ui/page.tsx';
import { ErrorState, Skeleton } from '#client/ui/states.tsx';
import type { QuoteView } from '#contract/quotes';
import { DraftSheet } from './draft-sheet.tsx';
import { IssuedSheet } from './issued-sheet.tsx';
import { pricingBookQuery, quoteQuery } from './queries.ts';

/** A quote: its draft to be written, or the version that went out. */
export function QuotePage() {
  const { quoteId } = useParams();
  const quote = useQuery(quoteQuery(Number(quoteId)));
  if (quote.isPending) return <Waiting />;
  if (quote.isError) return <Failed error={quote.error} retry={() => void quote.refetch()} />;
  return <QuoteSheet key={quote.data.quoteId} quote={quote.data} />;
}

function QuoteSheet({ quote }: { readonly quote: QuoteView }) {
  const { person } = useSession();
  const [search] = useSearchParams();
  const mayWrite = person?.roles.some((role) => role === 'counsellor' || role === 'manager') ?? false;
  const writing =
    quote.draft !== null && mayWrite && (quote.versions.length === 0 || search.get('edit') !== null);
  const book = useQuery({ ...pricingBookQuery(quote.siteId), enabled: writing });
  if (!writing || quote.draft === null) return <IssuedSheet quote={quote} mayWrite={mayWrite} />;
  if (book.isPending) return <Waiting />;
  if (book.isError) return <Failed error={book.error} retry={() => void book.refetch()} />;
  return <DraftSheet quote={quote} draft={quote.draft} book={book.data.book} />;
}

function Waiting() {
  return (
    <Page title="Quote">
      <Skeleton rows={10} label="Opening the quote" />
    </Page>
  );
}

function Failed({ error, retry }: { readonly error: unknown; readonly retry: () => void }) {
  return (
    <Page title="Quote">
      <ErrorState error={error} retry={retry} />
    </Page>
  );
}
