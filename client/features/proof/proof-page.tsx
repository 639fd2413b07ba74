import { useQuery } from '@tanstack/react-query';
import { Link, useSearchParams } from 'react-router-dom';
import { call, pathOf } from '#client/api/call.ts';
import { DateField } from '#client/ui/fields.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page } from '#client/ui/page.tsx';
import { ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { Tie } from '#client/ui/tie.tsx';
import { exportJournalCsv, exportJournalText } from '#contract/ledger';
import { getProof, type ProofControlView } from '#contract/proof';
import { formatDayWithWeekday, isClinicDate } from '#domain/time/index';

/** Every control total found two independent ways, as of any day; what does not tie leads to its source. */
export function ProofPage() {
  const [search, setSearch] = useSearchParams();
  const asked = search.get('asOf') ?? '';
  const asOf = isClinicDate(asked) ? asked : undefined;
  const proof = useQuery({
    queryKey: ['proof', asOf],
    queryFn: ({ signal }) => call(getProof, { query: { asOf } }, signal),
  });
  const data = proof.data;
  const apart = data?.controls.filter((control) => !control.tied).length ?? 0;
  return (
    <Page
      title="Proof"
      lead={
        data
          ? `as of ${formatDayWithWeekday(data.asOf)}, ${data.controls.length} controls, ${apart === 0 ? 'all tie' : `${apart} ${apart === 1 ? 'does' : 'do'} not tie`}`
          : 'Every figure found two ways.'
      }
      actions={
        <DateField
          label="As of"
          value={data?.asOf ?? asked}
          onChange={(value) => (isClinicDate(value) ? setSearch({ asOf: value }) : undefined)}
        />
      }
    >
      {proof.isPending ? <Skeleton rows={12} label="Proving the books" /> : null}
      {proof.isError ? <ErrorState error={proof.error} retry={() => void proof.refetch()} /> : null}
      {data ? (
        <>
          <div className="hidden gap-x-4 border-b-2 border-ink py-2 text-small font-semibold text-soft md:grid md:grid-cols-[1fr_9rem_9rem_7rem]">
            <span>Control</span>
            <span className="text-right">One way, {data.currency}</span>
            <span className="text-right">Other way, {data.currency}</span>
            <span className="text-right">Difference</span>
          </div>
          {data.controls.map((control) => (
            <Control key={control.id} control={control} currency={data.currency} />
          ))}
        </>
      ) : null}
      <p className="mt-8 flex flex-wrap gap-x-6 gap-y-2">
        <Link to="/proof/trial-balance">Trial balance</Link>
        <Link to="/proof/journal">Journal</Link>
        <a href={pathOf(exportJournalText, {})}>Journal as plain text</a>
        <a href={pathOf(exportJournalCsv, {})}>Journal as CSV</a>
      </p>
    </Page>
  );
}

function Control({ control, currency }: { readonly control: ProofControlView; readonly currency: string }) {
  return (
    <section aria-label={control.title} className="border-b border-rule py-3">
      <div className="grid gap-x-4 md:grid-cols-[1fr_9rem_9rem_7rem]">
        <div>
          <h2 className="text-body font-semibold">{control.title}</h2>
          <p className="text-small text-soft">
            {control.leftWords}, against {control.rightWords}
          </p>
        </div>
        <p className="text-right max-md:hidden">
          {control.leftMinor === null ? (
            <span className="text-small text-soft">{control.checked} checked</span>
          ) : (
            <Money amount={control.leftMinor} currency={currency} />
          )}
        </p>
        <p className="text-right max-md:hidden">
          {control.rightMinor === null ? null : <Money amount={control.rightMinor} currency={currency} />}
        </p>
        <p className="md:text-right">
          {control.differenceMinor === null || control.rows.length > 0 ? (
            control.tied ? (
              <span className="text-small font-semibold text-lissamine">ties</span>
            ) : (
              <StateWord tone="wrong">does not tie</StateWord>
            )
          ) : (
            <Tie difference={control.differenceMinor} currency={currency} />
          )}
        </p>
      </div>
      {control.rows.length > 0 ? (
        <ul className="mt-2">
          {control.rows.map((row) => (
            <li
              key={row.label}
              className="flex flex-wrap justify-between gap-x-4 border-t border-rule py-1.5 text-small"
            >
              <span>
                {row.link ? <Link to={row.link}>{row.label}</Link> : row.label}{' '}
                {row.finding ? <span className="font-semibold text-bengal">{row.finding}</span> : null}
              </span>
              {row.differenceMinor === null ? null : (
                <Tie difference={row.differenceMinor} currency={currency} />
              )}
            </li>
          ))}
        </ul>
      ) : null}
    </section>
  );
}
