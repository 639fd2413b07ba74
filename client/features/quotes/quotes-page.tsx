import { useQuery } from '@tanstack/react-query';
import { useCallback, useEffect, useState } from 'react';
import { Link, useSearchParams } from 'react-router-dom';
import { LinkButton } from '#client/ui/button.tsx';
import { CheckField, SelectField, TextField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Page } from '#client/ui/page.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import type { QuoteSummary } from '#contract/quotes';
import { currencySign } from '#domain/money/index';
import { optionLetter, type QuoteState } from '#domain/quotes/index';
import { type ClinicDate, dayOf, formatDay, formatDayShort } from '#domain/time/index';
import { type QuoteFilter, quotesQuery } from './queries.ts';
import { STATE, STATES } from './words.ts';

const TYPING_MS = 250;

/** Quotes of the site at hand: which wait for whom. Every filter is in the address. */
export function QuotesPage() {
  const [search, setSearch] = useSearchParams();
  const site = useSite();
  const set = useCallback(
    (name: string, value: string) =>
      setSearch(
        (before) => {
          const next = new URLSearchParams(before);
          if (value === '') next.delete(name);
          else next.set(name, value);
          return next;
        },
        { replace: true },
      ),
    [setSearch],
  );
  const state = STATES.find((each) => each === search.get('state'));
  const counsellor = Number(search.get('counsellor')) || undefined;
  const due = search.get('due') !== null;
  const q = search.get('q') ?? '';
  const filter: QuoteFilter = {
    siteId: site.siteId,
    ...(state ? { state } : {}),
    ...(counsellor ? { counsellor } : {}),
    ...(due ? { contactBy: site.businessDay } : {}),
    ...(q === '' ? {} : { q }),
  };
  const quotes = useQuery(quotesQuery(filter));
  const filtered = state !== undefined || counsellor !== undefined || due || q !== '';
  return (
    <Page title="Quotes" lead={`At ${site.name}, the last changed first`}>
      <div className="mb-6 grid items-end gap-4 sm:grid-cols-2 lg:grid-cols-4">
        <Words words={q} onWords={(words) => set('q', words)} />
        <SelectField
          label="State"
          value={state ?? ''}
          onChange={(next) => set('state', next)}
          choices={[
            { value: '', label: 'Every state' },
            ...STATES.map((each: QuoteState) => ({ value: each, label: STATE[each].words })),
          ]}
        />
        <SelectField
          label="Counsellor"
          value={counsellor ? String(counsellor) : ''}
          onChange={(next) => set('counsellor', next)}
          choices={[
            { value: '', label: 'Everybody' },
            ...(quotes.data?.counsellors ?? []).map((each) => ({
              value: String(each.userId),
              label: each.name,
            })),
          ]}
        />
        <CheckField
          label="To be contacted today"
          checked={due}
          onChange={(on) => set('due', on ? '1' : '')}
        />
      </div>
      {quotes.isPending ? <Skeleton rows={8} label="Looking for quotes" /> : null}
      {quotes.isError ? <ErrorState error={quotes.error} retry={() => void quotes.refetch()} /> : null}
      {quotes.data ? (
        <Found
          quotes={quotes.data.quotes}
          more={quotes.data.more}
          filtered={filtered}
          today={site.businessDay}
        />
      ) : null}
    </Page>
  );
}

function Words({ words, onWords }: { readonly words: string; readonly onWords: (words: string) => void }) {
  const [typed, setTyped] = useState(words);
  useEffect(() => setTyped(words), [words]);
  useEffect(() => {
    if (typed.trim() === words) return;
    const timer = setTimeout(() => onWords(typed.trim()), TYPING_MS);
    return () => clearTimeout(timer);
  }, [typed, words, onWords]);
  return <TextField label="Number or name" type="search" value={typed} onChange={setTyped} />;
}

function Found({
  quotes,
  more,
  filtered,
  today,
}: {
  readonly quotes: readonly QuoteSummary[];
  readonly more: boolean;
  readonly filtered: boolean;
  readonly today: ClinicDate;
}) {
  if (quotes.length === 0) {
    return (
      <EmptyState
        title={filtered ? 'No quote fits these filters' : 'No quotes here yet'}
        action={
          filtered ? (
            <LinkButton to="/quotes">Show every quote</LinkButton>
          ) : (
            <LinkButton to="/patients">Find a patient</LinkButton>
          )
        }
      >
        {filtered ? null : 'A quote begins on its patient’s page.'}
      </EmptyState>
    );
  }
  return (
    <>
      <SheetTable
        caption="Quotes"
        columns={columnsOf(today, quotes)}
        rows={quotes}
        rowKey={(row) => row.quoteId}
      />
      {more ? <p className="mt-3 text-soft">There are older ones. Narrow the filters to see them.</p> : null}
    </>
  );
}

function columnsOf(today: ClinicDate, quotes: readonly QuoteSummary[]): readonly SheetColumn<QuoteSummary>[] {
  const sign = quotes.find((quote) => quote.currency)?.currency;
  return [
    {
      id: 'eyes',
      head: <span className="sr-only">Eyes</span>,
      width: 'w-14',
      cell: (row) => (row.eyes.length > 0 ? <PairMark eyes={row.eyes} /> : null),
    },
    {
      id: 'quote',
      head: 'Quote',
      cell: (row) => (
        <>
          <Link to={`/quotes/${row.quoteId}`} className="font-semibold">
            {row.patient.name}
          </Link>
          <span className="block text-small text-soft">
            {row.number}
            {row.versionNo && row.versionNo > 1 ? `, version ${row.versionNo}` : ''} · {row.counsellor.name}
          </span>
        </>
      ),
    },
    {
      id: 'state',
      head: 'State',
      cell: (row) => <StateWord tone={STATE[row.state].tone}>{STATE[row.state].words}</StateWord>,
    },
    { id: 'next', head: 'What is known', wide: true, cell: (row) => <Known row={row} /> },
    {
      id: 'contact',
      head: 'Next contact',
      wide: true,
      cell: ({ nextContactOn }) =>
        nextContactOn === null ? (
          <span className="text-soft">none</span>
        ) : (
          <span className={nextContactOn <= today ? 'font-semibold text-povidone' : ''}>
            {formatDayShort(nextContactOn)}
          </span>
        ),
    },
    {
      id: 'totals',
      head: sign ? `Options, ${currencySign(sign)}` : 'Options',
      align: 'right',
      cell: (row) => <Totals row={row} />,
    },
  ];
}

function Known({ row }: { readonly row: QuoteSummary }) {
  const { zone } = useSite();
  if (row.state === 'issued' && row.validUntil) {
    const opened = row.openedAt ? `opened ${formatDay(dayOf(row.openedAt, zone))}` : 'not opened yet';
    return (
      <span className="text-small">
        {opened}, good until {formatDay(row.validUntil)}
      </span>
    );
  }
  if (row.state === 'lapsed' && row.validUntil)
    return <span className="text-small text-soft">was good until {formatDay(row.validUntil)}</span>;
  return <span className="text-small text-soft">changed {formatDay(dayOf(row.changedAt, zone))}</span>;
}

function Totals({ row }: { readonly row: QuoteSummary }) {
  const { currency } = row;
  if (currency === null) return <span className="text-soft">not sent yet</span>;
  return (
    <ul>
      {row.totalsMinor.map((total, index) => (
        <li key={optionLetter(index)}>
          {row.totalsMinor.length > 1 ? (
            <span className="mr-2 text-small text-soft">{optionLetter(index)}</span>
          ) : null}
          <Figure
            id={`quote-${row.quoteId}-${optionLetter(index)}`}
            amount={total}
            currency={currency}
            why={{
              title: `Option ${optionLetter(index)} of ${row.number}`,
              steps: [{ label: `As issued, version ${row.versionNo}`, amountMinor: total }],
              note: 'The quote shows every line of it.',
            }}
          />
        </li>
      ))}
    </ul>
  );
}
