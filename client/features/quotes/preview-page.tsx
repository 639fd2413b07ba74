import { useQuery } from '@tanstack/react-query';
import { Link, useParams, useSearchParams } from 'react-router-dom';
import { Money } from '#client/ui/money.tsx';
import { Page } from '#client/ui/page.tsx';
import { useSite } from '#client/ui/site.tsx';
import { EmptyState, ErrorState, Skeleton } from '#client/ui/states.tsx';
import type { QuoteView } from '#contract/quotes';
import { compilePriceBook, type PriceBook, type PricedCourse } from '#domain/pricing/index';
import { optionLetter, optionWords, priceOption } from '#domain/quotes/index';
import { formatDay } from '#domain/time/index';
import { pricingBookQuery, quoteQuery } from './queries.ts';
import { quoteFacts } from './use-prices.ts';
import { cancellationWords, dueDayWords, toPayWords } from './words.ts';

/** What the patient will read, at the width of a phone: the draft where one is being written, else what went out. */
export function PreviewPage() {
  const quoteId = Number(useParams().quoteId);
  const [search] = useSearchParams();
  const quote = useQuery(quoteQuery(quoteId));
  const book = useQuery({ ...pricingBookQuery(quote.data?.siteId ?? 0), enabled: quote.data !== undefined });
  const pending = quote.isPending || book.isPending;
  const error = quote.error ?? book.error;
  return (
    <Page
      title="As the patient reads it"
      over={<Link to={`/quotes/${quoteId}?${search.toString()}`}>Back to the quote</Link>}
    >
      {pending && !error ? <Skeleton rows={8} /> : null}
      {error ? <ErrorState error={error} retry={() => void quote.refetch()} /> : null}
      {quote.data && book.data ? (
        <Preview quote={quote.data} book={book.data.book} edit={search.get('edit') !== null} />
      ) : null}
    </Page>
  );
}

interface PreviewOption {
  readonly label: string;
  readonly course: PricedCourse | null;
}

function optionsOf(quote: QuoteView, book: PriceBook, edit: boolean): readonly PreviewOption[] {
  const { draft, versions } = quote;
  const [version] = versions;
  if (draft && (edit || !version)) {
    const compiled = compilePriceBook(book);
    return draft.options.map((option) => {
      const result = priceOption(draft, option, quoteFacts(quote), compiled);
      return { label: optionWords(option, book), course: result.ok ? result.course : null };
    });
  }
  return version?.options.map((option) => ({ label: option.label, course: option.priced })) ?? [];
}

function Preview({
  quote,
  book,
  edit,
}: {
  readonly quote: QuoteView;
  readonly book: PriceBook;
  readonly edit: boolean;
}) {
  const site = useSite();
  const options = optionsOf(quote, book, edit);
  const priced = options.filter((option) => option.course !== null);
  if (priced.length === 0)
    return <EmptyState title="Nothing to read yet">What is missing is marked on the quote.</EmptyState>;
  return (
    <div className="mx-auto max-w-[390px] border-2 border-ink px-4 py-6">
      <p className="text-soft">{site.name}</p>
      <h2 className="text-title">Your quote, {quote.patient.givenName}</h2>
      {priced.map(({ label, course }, index) =>
        course ? (
          <PatientOption
            key={optionLetter(index)}
            label={label}
            course={course}
            letter={options.length > 1 ? optionLetter(index) : null}
          />
        ) : null,
      )}
      <p className="mt-6 text-small text-soft">
        Whether your eyes may be treated is your surgeon’s decision. This page is a price, not advice.
      </p>
    </div>
  );
}

function PatientOption({
  label,
  course,
  letter,
}: {
  readonly label: string;
  readonly course: PricedCourse;
  readonly letter: string | null;
}) {
  const { currency } = course;
  return (
    <section className="mt-6 border-t-2 border-ink pt-4">
      <h3>{letter ? `Option ${letter}, ${label.toLowerCase()}` : label}</h3>
      <p className="mt-2 text-figure font-extrabold">
        <Money amount={course.totalMinor} currency={currency} alone />
      </p>
      <p className="text-soft">
        {toPayWords(course).replace('To pay, ', '')} · good until {formatDay(course.validUntil)}
      </p>
      {course.standing === 'estimate' ? (
        <p className="mt-1 font-semibold text-povidone">An estimate, subject to assessment</p>
      ) : null}
      <List title="Included">{course.included.map((each) => [each.label, null] as const)}</List>
      {course.notIncluded.length > 0 ? (
        <p className="mt-2 text-small text-soft">Not included: {course.notIncluded.join(', ')}.</p>
      ) : null}
      <List title="When you pay">
        {course.schedule.map(
          (due) =>
            [
              `${dueDayWords(due.dueOn, due.kind)}${due.kind === 'instalment' ? `, ${due.label.toLowerCase()}` : ''}`,
              <Money key={due.id} amount={due.amountMinor} currency={currency} />,
            ] as const,
        )}
      </List>
      <List title="If you cancel, comes back">
        {course.cancellation
          .filter((row) => row.event !== 'moves')
          .map(
            (row) =>
              [
                cancellationWords(row),
                row.comesBackMinor === null ? (
                  'all'
                ) : (
                  <Money key={row.detail} amount={row.comesBackMinor} currency={currency} />
                ),
              ] as const,
          )}
      </List>
    </section>
  );
}

function List({
  title,
  children,
}: {
  readonly title: string;
  readonly children: readonly (readonly [string, React.ReactNode])[];
}) {
  if (children.length === 0) return null;
  return (
    <>
      <h4 className="mt-4 text-small font-semibold text-soft">{title}</h4>
      <ul>
        {children.map(([words, value]) => (
          <li key={words} className="flex justify-between gap-4 border-b border-rule py-1.5">
            <span>{words}</span>
            <span className="text-right">{value}</span>
          </li>
        ))}
      </ul>
    </>
  );
}
