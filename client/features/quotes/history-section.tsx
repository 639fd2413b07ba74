import { Link } from 'react-router-dom';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { DateField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Section } from '#client/ui/page.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { StateWord } from '#client/ui/states.tsx';
import type { QuoteLinkView, QuoteVersionView, QuoteView } from '#contract/quotes';
import { optionLetter } from '#domain/quotes/index';
import { dayOf, formatDay, formatTime, type Instant } from '#domain/time/index';
import { totalWhy } from './derivations.ts';
import { useNextContact, useRevokeLinks } from './queries.ts';

/** Versions, links and the next contact: who did what when. */
export function HistorySection({
  quote,
  mayWrite,
}: {
  readonly quote: QuoteView;
  readonly mayWrite: boolean;
}) {
  const open = quote.state === 'draft' || quote.state === 'issued' || quote.state === 'lapsed';
  return (
    <>
      <Section title="Versions">
        {quote.versions.length === 0 ? (
          <p className="border-y border-rule py-3 text-soft">None has been issued.</p>
        ) : (
          <SheetTable
            caption="Versions of this quote"
            columns={VERSION_COLUMNS}
            rows={quote.versions}
            rowKey={(row) => row.versionNo}
          />
        )}
      </Section>
      <Links quote={quote} mayWrite={mayWrite} />
      {open && mayWrite ? <NextContact quote={quote} /> : null}
    </>
  );
}

const VERSION_COLUMNS: readonly SheetColumn<QuoteVersionView>[] = [
  { id: 'no', head: 'Version', cell: (row) => <Link to={`?version=${row.versionNo}`}>{row.versionNo}</Link> },
  { id: 'on', head: 'Issued', cell: (row) => formatDay(row.issuedOn) },
  { id: 'by', head: 'By', wide: true, cell: (row) => row.issuedBy },
  { id: 'book', head: 'Price book', wide: true, cell: (row) => row.priceBookVersion },
  { id: 'until', head: 'Good until', wide: true, cell: (row) => formatDay(row.validUntil) },
  {
    id: 'totals',
    head: 'Options',
    align: 'right',
    cell: (row) => (
      <ul>
        {row.options.map((option, index) => (
          <li key={optionLetter(index)}>
            <span className="mr-2 text-small text-soft">{optionLetter(index)}</span>
            <Figure
              id={`version-${row.versionNo}-${optionLetter(index)}`}
              amount={option.priced.totalMinor}
              currency={option.priced.currency}
              why={totalWhy(option.priced)}
            />
          </li>
        ))}
      </ul>
    ),
  },
];

function Links({ quote, mayWrite }: { readonly quote: QuoteView; readonly mayWrite: boolean }) {
  const announce = useAnnounce();
  const revoke = useRevokeLinks();
  const { zone } = useSite();
  if (quote.links.length === 0) return null;
  const moment = (at: Instant | null) =>
    at === null ? (
      <span className="text-soft">never</span>
    ) : (
      `${formatDay(dayOf(at, zone))}, ${formatTime(at, zone)}`
    );
  const columns: readonly SheetColumn<QuoteLinkView>[] = [
    { id: 'to', head: 'Link sent to', cell: (row) => row.sentTo ?? 'nobody' },
    { id: 'at', head: 'When', wide: true, cell: (row) => moment(row.createdAt) },
    { id: 'opened', head: 'Last opened', cell: (row) => moment(row.lastOpenedAt) },
    {
      id: 'state',
      head: 'State',
      align: 'right',
      cell: (row) => (
        <StateWord tone={row.works ? 'settled' : 'plain'}>
          {row.works ? 'works' : row.revokedAt ? 'stopped' : 'run out'}
        </StateWord>
      ),
    },
  ];
  return (
    <Section
      title="Links"
      aside={
        mayWrite && quote.links.some((link) => link.works) ? (
          <Button
            kind="quiet"
            sending={revoke.isPending}
            onPress={() =>
              revoke.mutate(quote.quoteId, {
                onSuccess: () => announce('No link of this quote works any more.'),
                onError: (error) => announce(error.message),
              })
            }
          >
            Stop every link
          </Button>
        ) : null
      }
    >
      <SheetTable
        caption="Links that went out"
        columns={columns}
        rows={quote.links}
        rowKey={(row) => row.quoteLinkId}
      />
    </Section>
  );
}

function NextContact({ quote }: { readonly quote: QuoteView }) {
  const set = useNextContact();
  const announce = useAnnounce();
  return (
    <Section title="Next contact">
      <DateField
        label="Talk to the patient again on"
        value={quote.nextContactOn ?? ''}
        min={quote.today}
        className="max-w-56"
        error={set.error?.message}
        onChange={(text) =>
          set.mutate(
            { params: { quoteId: quote.quoteId }, body: { nextContactOn: text === '' ? null : text } },
            { onSuccess: () => announce(text === '' ? 'No next contact.' : 'Next contact noted.') },
          )
        }
      />
    </Section>
  );
}
