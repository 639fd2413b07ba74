import { useQuery } from '@tanstack/react-query';
import { Section } from '#client/ui/page.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import { EmptyState, ErrorState, Skeleton } from '#client/ui/states.tsx';
import type { BookChangeView, PriceBookView } from '#contract/catalogue';
import { bookChangesQuery } from './queries.ts';
import { pathWords, sectionWords, valueWords } from './words.ts';

interface Row {
  readonly key: string;
  readonly rule: string;
  readonly what: string;
  readonly before: string;
  readonly after: string;
}

/** A version against the one in force, rule by rule, each member before and after. */
export function Changes({ book }: { readonly book: PriceBookView }) {
  const changes = useQuery(bookChangesQuery(book.priceBookId));
  if (changes.isPending) return <Skeleton rows={6} label="Comparing" />;
  if (changes.isError) return <ErrorState error={changes.error} retry={() => void changes.refetch()} />;
  const { against } = changes.data;
  const told = changes.data.changes.filter((change) => change.section !== 'inForceFrom');
  if (told.length === 0) {
    return (
      <EmptyState title={`Nothing differs from version ${against.versionNo}, which is in force`}>
        Change the draft in its file and import it again to see the differences here.
      </EmptyState>
    );
  }
  const sections = [...new Set(told.map((change) => change.section))];
  const columns: readonly SheetColumn<Row>[] = [
    {
      id: 'what',
      head: 'Rule',
      cell: (row) => (
        <>
          {row.rule} <span className="text-small text-soft">{row.what}</span>
        </>
      ),
    },
    { id: 'before', head: `Version ${against.versionNo}`, align: 'right', cell: (row) => row.before },
    {
      id: 'after',
      head: `Version ${book.versionNo}`,
      align: 'right',
      cell: (row) => <strong>{row.after}</strong>,
    },
  ];
  return sections.map((section) => (
    <Section key={section} title={sectionWords(section)}>
      <SheetTable
        caption={`Differences in ${sectionWords(section)}`}
        columns={columns}
        rows={told.filter((change) => change.section === section).flatMap((change) => rowsOf(change, book))}
        rowKey={(row) => row.key}
      />
    </Section>
  ));
}

function rowsOf(change: BookChangeView, book: PriceBookView): Row[] {
  const rule = change.ruleId === null ? sectionWords(change.section) : change.label;
  if (change.change !== 'changed') {
    const added = change.change === 'added';
    return [
      {
        key: `${change.section}-${change.ruleId}`,
        rule,
        what: added ? 'added' : 'taken out',
        before: added ? 'not there' : 'there',
        after: added ? 'there' : 'not there',
      },
    ];
  }
  return change.fields.map((field) => ({
    key: `${change.section}-${change.ruleId}-${field.path}`,
    rule,
    what: pathWords(field.path),
    before: valueWords(field.path, field.before, book.book.currency),
    after: valueWords(field.path, field.after, book.book.currency),
  }));
}
