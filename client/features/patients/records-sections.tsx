import { Link } from 'react-router-dom';
import { Figure } from '#client/ui/figure.tsx';
import { Section } from '#client/ui/page.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import { StateWord } from '#client/ui/states.tsx';
import type { PatientView } from '#contract/patients';
import { currencySign, subtract } from '#domain/money/index';
import { optionLetter } from '#domain/quotes/index';
import { formatDay } from '#domain/time/index';
import { courseWhy, QUOTE_WORDS, quoteWhy } from './words.ts';

type Course = PatientView['courses'][number];
type Quote = PatientView['quotes'][number];

/** Courses of care, each with its pair mark and what is left to pay. */
export function CoursesSection({
  patient,
  linked,
}: {
  readonly patient: PatientView;
  readonly linked: boolean;
}) {
  const sign = currencySign(patient.courses[0]?.currency ?? ('' as never));
  if (patient.courses.length === 0) {
    return (
      <Section title="Courses of care">
        <p className="border-y border-rule py-3 text-soft">
          None yet. A course opens when a quote is accepted.
        </p>
      </Section>
    );
  }
  const columns: readonly SheetColumn<Course>[] = [
    {
      id: 'mark',
      head: <span className="sr-only">Eyes</span>,
      width: 'w-14',
      cell: (course) => <PairMark eyes={course.eyes} />,
    },
    {
      id: 'number',
      head: 'Course',
      cell: (course) =>
        linked ? <Link to={`/courses/${course.courseId}`}>{course.number}</Link> : course.number,
    },
    { id: 'accepted', head: 'Accepted', wide: true, cell: (course) => formatDay(course.acceptedOn) },
    { id: 'eyes', head: 'Eyes', wide: true, cell: (course) => <EyeWords course={course} /> },
    {
      id: 'total',
      head: `Price, ${sign}`,
      align: 'right',
      cell: (course) => (
        <Figure
          id={`course-${course.courseId}`}
          amount={course.totalMinor}
          currency={course.currency}
          why={courseWhy(course, 'total')}
        />
      ),
    },
    {
      id: 'left',
      head: `Left, ${sign}`,
      align: 'right',
      cell: (course) => (
        <Figure
          id={`left-${course.courseId}`}
          amount={subtract(course.totalMinor, course.paidMinor)}
          currency={course.currency}
          why={courseWhy(course, 'left')}
        />
      ),
    },
  ];
  return (
    <Section title="Courses of care">
      <SheetTable
        caption="Courses of care"
        columns={columns}
        rows={patient.courses}
        rowKey={(row) => row.courseId}
      />
    </Section>
  );
}

function EyeWords({ course }: { readonly course: Course }) {
  return (
    <ul>
      {course.eyes.map((eye) => (
        <li key={eye.eye} className="text-small">
          {eye.eye} {eye.procedure},{' '}
          <span className="text-soft">
            {eye.state === 'done' && eye.doneOn
              ? `done ${formatDay(eye.doneOn)}`
              : eye.state === 'planned'
                ? eye.plannedOn
                  ? `planned ${formatDay(eye.plannedOn)}`
                  : 'no day yet'
                : 'cancelled'}
          </span>
        </li>
      ))}
    </ul>
  );
}

/** Quotes with what each option comes to. */
export function QuotesSection({
  patient,
  linked,
}: {
  readonly patient: PatientView;
  readonly linked: boolean;
}) {
  if (patient.quotes.length === 0) {
    return (
      <Section title="Quotes">
        <p className="border-y border-rule py-3 text-soft">None yet.</p>
      </Section>
    );
  }
  const sign = currencySign(patient.quotes.find((quote) => quote.currency)?.currency ?? ('' as never));
  const columns: readonly SheetColumn<Quote>[] = [
    {
      id: 'number',
      head: 'Quote',
      cell: (quote) => (linked ? <Link to={`/quotes/${quote.quoteId}`}>{quote.number}</Link> : quote.number),
    },
    {
      id: 'state',
      head: 'State',
      cell: ({ state }) => <StateWord tone={QUOTE_WORDS[state].tone}>{QUOTE_WORDS[state].words}</StateWord>,
    },
    {
      id: 'until',
      head: 'Good until',
      wide: true,
      cell: ({ validUntil }) =>
        validUntil ? formatDay(validUntil) : <span className="text-soft">not sent yet</span>,
    },
    { id: 'who', head: 'Counsellor', wide: true, cell: (quote) => quote.counsellor },
    {
      id: 'totals',
      head: sign === '' ? 'Options' : `Options, ${sign}`,
      align: 'right',
      cell: (quote) => <Totals quote={quote} />,
    },
  ];
  return (
    <Section title="Quotes">
      <SheetTable caption="Quotes" columns={columns} rows={patient.quotes} rowKey={(row) => row.quoteId} />
    </Section>
  );
}

function Totals({ quote }: { readonly quote: Quote }) {
  const { currency } = quote;
  if (currency === null) return null;
  return (
    <ul>
      {quote.totalsMinor.map((total, index) => (
        <li key={optionLetter(index)}>
          <span className="mr-2 text-small text-soft">{optionLetter(index)}</span>
          <Figure
            id={`quote-${quote.quoteId}-${index}`}
            amount={total}
            currency={currency}
            why={quoteWhy(quote, index)}
          />
        </li>
      ))}
    </ul>
  );
}
