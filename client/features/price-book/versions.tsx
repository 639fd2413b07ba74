import { Link } from 'react-router-dom';
import { Section } from '#client/ui/page.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import { StateWord } from '#client/ui/states.tsx';
import type { BookSummary } from '#contract/catalogue';
import { formatDay } from '#domain/time/index';
import { STANDING } from './standing.ts';

/** Every version, drafts among them, newest first. */
export function Versions({
  books,
  shown,
}: {
  readonly books: readonly BookSummary[];
  readonly shown: number;
}) {
  const columns: readonly SheetColumn<BookSummary>[] = [
    {
      id: 'no',
      head: 'Version',
      cell: (row) =>
        row.priceBookId === shown ? (
          <span className="font-extrabold">{row.versionNo}, shown</span>
        ) : (
          <Link to={`/price-book?book=${row.priceBookId}`}>{row.versionNo}</Link>
        ),
    },
    {
      id: 'standing',
      head: 'Standing',
      cell: (row) => <StateWord tone={STANDING[row.standing].tone}>{STANDING[row.standing].words}</StateWord>,
    },
    {
      id: 'from',
      head: 'From',
      cell: (row) =>
        row.inForceOn ? formatDay(row.inForceOn) : <span className="text-soft">no day yet</span>,
    },
    { id: 'by', head: 'Drafted by', wide: true, cell: (row) => row.createdBy },
    { id: 'for', head: 'For', wide: true, cell: (row) => (row.siteId === null ? 'every site' : 'one site') },
  ];
  return (
    <Section title="Versions">
      <SheetTable
        caption="Versions of the price book"
        columns={columns}
        rows={books}
        rowKey={(row) => row.priceBookId}
      />
    </Section>
  );
}
