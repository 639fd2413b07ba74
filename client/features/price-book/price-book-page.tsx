import { useQuery } from '@tanstack/react-query';
import { useSearchParams } from 'react-router-dom';
import { useSession } from '#client/api/session.ts';
import { MarginNote } from '#client/ui/margin.tsx';
import { Page } from '#client/ui/page.tsx';
import { useSite } from '#client/ui/site.tsx';
import { EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import type { BookSummary, PriceBookView } from '#contract/catalogue';
import { formatDay } from '#domain/time/index';
import { BookActions } from './book-actions.tsx';
import { BookSections } from './book-sections.tsx';
import { Changes } from './changes.tsx';
import { Findings } from './findings.tsx';
import { ImportBook } from './import-book.tsx';
import { priceBookQuery, priceBooksQuery } from './queries.ts';
import { STANDING } from './standing.ts';
import { Versions } from './versions.tsx';

const NOTE = (
  <>
    <p className="font-semibold text-ink">Once in force</p>
    <p className="mt-1">
      A version never changes again: quotes keep the one they were made from. To change a price, begin a draft
      and put it in force from a day.
    </p>
  </>
);

/** The price book: the version in force to be read, drafts and their differences beside it. */
export function PriceBookPage() {
  const [search] = useSearchParams();
  const site = useSite();
  const books = useQuery(priceBooksQuery);
  const wanted = Number(search.get('book'));
  const shown = books.data ? chooseBook(books.data.books, wanted, site.siteId) : undefined;
  if (books.isPending)
    return (
      <Page title="Price book">
        <Skeleton rows={10} label="Opening the price book" />
      </Page>
    );
  if (books.isError)
    return (
      <Page title="Price book">
        <ErrorState error={books.error} retry={() => void books.refetch()} />
      </Page>
    );
  if (!shown) return <NoBook />;
  return <OneBook priceBookId={shown.priceBookId} books={books.data.books} />;
}

/** The one the address names, else what this site quotes from today, else the newest. */
function chooseBook(books: readonly BookSummary[], wanted: number, siteId: number): BookSummary | undefined {
  const inForce = books.filter((book) => book.standing === 'in_force');
  return (
    books.find((book) => book.priceBookId === wanted) ??
    inForce.find((book) => book.siteId === siteId) ??
    inForce.find((book) => book.siteId === null) ??
    books[0]
  );
}

function NoBook() {
  const { person } = useSession();
  const manager = person?.roles.includes('manager') ?? false;
  return (
    <Page title="Price book">
      <EmptyState title="There is no price book yet" action={manager ? <ImportBook /> : null}>
        Quotes need one in force. A manager brings the first as a file.
      </EmptyState>
    </Page>
  );
}

function OneBook({
  priceBookId,
  books,
}: {
  readonly priceBookId: number;
  readonly books: readonly BookSummary[];
}) {
  const book = useQuery(priceBookQuery(priceBookId));
  const [search] = useSearchParams();
  const comparing = search.get('compare') !== null;
  return (
    <Page
      title={book.data ? `Price book ${book.data.versionNo}` : 'Price book'}
      over={book.data ? <Standing book={book.data} /> : 'Price book'}
      lead={book.data ? `drafted by ${book.data.createdBy}, prices in ${book.data.currency}` : undefined}
      actions={book.data ? <BookActions book={book.data} comparing={comparing} /> : null}
    >
      {book.isPending ? <Skeleton rows={10} label="Opening the price book" /> : null}
      {book.isError ? <ErrorState error={book.error} retry={() => void book.refetch()} /> : null}
      {book.data ? (
        <>
          <Findings findings={book.data.findings} draft={book.data.standing === 'draft'} />
          {comparing ? <Changes book={book.data} /> : <BookSections view={book.data} />}
          <Versions books={books} shown={priceBookId} />
          <MarginNote>{NOTE}</MarginNote>
        </>
      ) : null}
    </Page>
  );
}

function Standing({ book }: { readonly book: PriceBookView }) {
  const { words, tone } = STANDING[book.standing];
  return (
    <>
      <StateWord tone={tone}>{words}</StateWord>
      {book.inForceOn ? `, from ${formatDay(book.inForceOn)}` : ''}
      {book.siteId === null ? ', for every site' : ', for one site'}
    </>
  );
}
