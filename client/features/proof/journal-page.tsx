import { useInfiniteQuery } from '@tanstack/react-query';
import { Link, useSearchParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { Button } from '#client/ui/button.tsx';
import { DateField, SelectField, TextField } from '#client/ui/fields.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page } from '#client/ui/page.tsx';
import { EmptyState, ErrorState, Skeleton } from '#client/ui/states.tsx';
import { type JournalEntryView, listEntries } from '#contract/ledger';
import { CHART } from '#domain/ledger/index';
import { formatDayShort, isClinicDate } from '#domain/time/index';

/** The journal, newest first; every filter stands in the address. */
export function JournalPage() {
  const [search, setSearch] = useSearchParams();
  const filter = {
    account: search.get('account') || undefined,
    words: search.get('words') || undefined,
    from: dayIn(search.get('from')),
    to: dayIn(search.get('to')),
    before: search.get('before') ? Number(search.get('before')) : undefined,
  };
  const journal = useInfiniteQuery({
    queryKey: ['journal', filter],
    initialPageParam: filter.before,
    queryFn: ({ pageParam, signal }) =>
      call(listEntries, { query: { ...filter, before: pageParam } }, signal),
    getNextPageParam: (last) => (last.more ? last.entries.at(-1)?.entryId : undefined),
  });
  const set = (name: string, value: string): void =>
    setSearch(
      (before) => {
        const next = new URLSearchParams(before);
        if (value === '') next.delete(name);
        else next.set(name, value);
        next.delete('before');
        return next;
      },
      { replace: true },
    );
  const entries = journal.data?.pages.flatMap((each) => each.entries) ?? [];
  return (
    <Page
      title="Journal"
      over={<Link to="/proof">Proof</Link>}
      lead="Double entry, only ever added to; corrections name what they correct."
    >
      <div className="mb-6 grid gap-4 sm:grid-cols-2 lg:grid-cols-4">
        <SelectField
          label="Account"
          value={filter.account ?? ''}
          onChange={(value) => set('account', value)}
          choices={[
            { value: '', label: 'Every account' },
            ...CHART.map((each) => ({ value: each.code, label: `${each.code} ${each.name}` })),
          ]}
        />
        <TextField
          label="Words"
          value={search.get('words') ?? ''}
          onChange={(value) => set('words', value)}
        />
        <DateField label="From" value={search.get('from') ?? ''} onChange={(value) => set('from', value)} />
        <DateField label="To" value={search.get('to') ?? ''} onChange={(value) => set('to', value)} />
      </div>
      {journal.isPending ? <Skeleton rows={10} label="Fetching the journal" /> : null}
      {journal.isError ? <ErrorState error={journal.error} retry={() => void journal.refetch()} /> : null}
      {journal.isSuccess && entries.length === 0 ? (
        <EmptyState title="No entry fits">Widen the days or choose another account.</EmptyState>
      ) : null}
      {entries.map((entry) => (
        <Entry key={entry.entryId} entry={entry} />
      ))}
      {journal.hasNextPage ? (
        <Button
          className="mt-6"
          sending={journal.isFetchingNextPage}
          onPress={() => void journal.fetchNextPage()}
        >
          Older entries
        </Button>
      ) : null}
    </Page>
  );
}

function dayIn(text: string | null) {
  return text !== null && isClinicDate(text) ? text : undefined;
}

function Entry({ entry }: { readonly entry: JournalEntryView }) {
  return (
    <section aria-label={`Entry ${entry.entryId}`} className="border-b border-rule py-3">
      <p className="flex flex-wrap justify-between gap-x-4">
        <span className="font-semibold">{entry.memo}</span>
        <span className="text-small text-soft">
          {formatDayShort(entry.bookedOn)} · {entry.siteName} · entry {entry.entryId}
        </span>
      </p>
      <p className="text-small text-soft">
        {entry.kind.replaceAll('_', ' ')}
        {entry.by ? `, ${entry.by}` : ', by the house'}
        {entry.occurredOn === entry.bookedOn ? '' : `, happened ${formatDayShort(entry.occurredOn)}`}
        {entry.correctsEntryId ? `, corrects entry ${entry.correctsEntryId}` : ''}
      </p>
      <table className="mt-1 w-full text-small">
        <caption className="sr-only">Lines of entry {entry.entryId}</caption>
        <thead className="sr-only">
          <tr>
            <th scope="col">Account</th>
            <th scope="col">Debit</th>
            <th scope="col">Credit</th>
          </tr>
        </thead>
        <tbody>
          {entry.lines.map((line) => (
            <tr key={line.lineNo}>
              <td className="py-0.5 pr-3">
                <span className={line.amountMinor < 0 ? 'pl-6' : ''}>
                  {line.account} {line.accountName}
                </span>
                <span className="text-soft">
                  {[line.courseNumber, line.eye, line.tillName, line.payeeName]
                    .filter(Boolean)
                    .map((each) => ` · ${each}`)}
                </span>
              </td>
              <td className="w-28 py-0.5 text-right">
                {line.amountMinor > 0 ? <Money amount={line.amountMinor} currency={entry.currency} /> : null}
              </td>
              <td className="w-28 py-0.5 text-right">
                {line.amountMinor < 0 ? <Money amount={-line.amountMinor} currency={entry.currency} /> : null}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  );
}
