import { useQuery } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { pathOf } from '#client/api/call.ts';
import { Skeleton } from '#client/ui/states.tsx';
import { getMyQuotePdf, type PatientQuote } from '#contract/portal';
import { formatDay, formatDayShort } from '#domain/time/index';
import { AcceptForm } from './accept-form.tsx';
import { DeadLink } from './dead-link.tsx';
import { MyCourse } from './my-course.tsx';
import { OptionView } from './option-view.tsx';
import { myQuoteQuery } from './queries.ts';

/** The patient's page: the quote, what it includes, what comes back; then the course and what is paid. */
export function MyQuotePage() {
  const quote = useQuery(myQuoteQuery);
  useEffect(() => {
    document.title = 'Your quote';
  }, []);
  if (quote.isPending) return <Skeleton rows={8} label="Opening your quote" />;
  if (quote.isError) return <DeadLink error={quote.error} />;
  return <Quote quote={quote.data} />;
}

function Quote({ quote }: { readonly quote: PatientQuote }) {
  const [chosen, setChosen] = useState(quote.accepted?.optionNo ?? 1);
  const option =
    quote.options.find((each) => each.optionNo === (quote.accepted?.optionNo ?? chosen)) ?? quote.options[0];
  if (!option) return null;
  return (
    <article>
      <p className="text-small text-soft">{quote.clinicName}</p>
      {quote.course ? <MyCourse quote={quote} course={quote.course} /> : <ClosedNote quote={quote} />}
      {quote.course ? (
        <h2 className="mt-10">What you accepted</h2>
      ) : (
        <h1 className="mt-4">Your quote, {quote.givenName}</h1>
      )}
      {quote.options.length > 1 && !quote.accepted ? (
        <fieldset className="mt-4 flex flex-wrap gap-2">
          <legend className="mb-1 text-small text-soft">You have a choice</legend>
          {quote.options.map((each) => (
            <label
              key={each.optionNo}
              className={`flex min-h-11 items-center gap-2 border px-3 ${each.optionNo === chosen ? 'border-ink bg-sheet font-semibold' : 'border-edge'}`}
            >
              <input
                type="radio"
                name="option"
                checked={each.optionNo === chosen}
                onChange={() => setChosen(each.optionNo)}
                className="accent-trypan"
              />
              {String.fromCharCode(64 + each.optionNo)}: {each.label}
            </label>
          ))}
        </fieldset>
      ) : null}
      <OptionView option={option} currency={quote.currency} />
      {quote.state === 'issued' ? <AcceptForm quote={quote} option={option} /> : null}
      <div className="mt-6 grid gap-3 text-small text-soft">
        {quote.state === 'issued' ? (
          <p>Take the time you need: this price holds until {formatDay(quote.validUntil)}.</p>
        ) : null}
        <p>
          Your surgeon, {quote.surgeonName}, decides whether treatment is right for you and asks for your
          consent in person.
        </p>
        <p>
          <a href={pathOf(getMyQuotePdf, {})} target="_blank" rel="noreferrer">
            This quote as PDF
          </a>{' '}
          · quote {quote.quoteNumber}, {formatDayShort(quote.issuedOn)}
        </p>
        <p>
          {quote.siteName}, {quote.siteAddress}
        </p>
      </div>
    </article>
  );
}

/** Why this quote cannot be accepted here, and what to do. */
function ClosedNote({ quote }: { readonly quote: PatientQuote }) {
  const words = {
    issued: null,
    accepted: null,
    lapsed: `This price held until ${formatDay(quote.validUntil)}. Call us and we send you a new quote; nothing is owed.`,
    withdrawn: 'The clinic has withdrawn this quote. Call us to learn what comes next; nothing is owed.',
    superseded: 'There is a newer version of this quote. Please use the link in the newest e-mail from us.',
  }[quote.state];
  if (words === null) return null;
  return (
    <p role="status" className="mt-4 border-y-2 border-povidone py-3 font-semibold text-povidone">
      {words}
    </p>
  );
}
