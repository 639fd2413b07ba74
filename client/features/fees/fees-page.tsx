import { queryOptions, useQuery } from '@tanstack/react-query';
import { useSearchParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { Button } from '#client/ui/button.tsx';
import { SelectField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { moneyText } from '#client/ui/money.tsx';
import { DefinitionRows, Page, Section } from '#client/ui/page.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { useSite } from '#client/ui/site.tsx';
import { Caution, EmptyState, ErrorState, Skeleton } from '#client/ui/states.tsx';
import { type FeeRowView, getFeeMonth, listSurgeons } from '#contract/fees';
import {
  addMonths,
  type ClinicDate,
  firstOfMonth,
  formatDayWithWeekday,
  formatMonth,
  isClinicDate,
} from '#domain/time/index';

const surgeonsQuery = queryOptions({
  queryKey: ['surgeons'],
  queryFn: ({ signal }) => call(listSurgeons, {}, signal),
});
const monthQuery = (surgeonId: number, month: ClinicDate) =>
  queryOptions({
    queryKey: ['fees', surgeonId, month],
    queryFn: ({ signal }) => call(getFeeMonth, { params: { surgeonId }, query: { month } }, signal),
  });

/** A surgeon's eyes of a month, each with its fee and why. Surgeons see their own; the manager chooses whose. */
export function FeesPage() {
  const site = useSite();
  const [search, setSearch] = useSearchParams();
  const asked = search.get('month') ?? '';
  const month = firstOfMonth(isClinicDate(asked) ? asked : site.businessDay);
  const surgeons = useQuery(surgeonsQuery);
  const surgeonId = Number(search.get('surgeon') ?? surgeons.data?.surgeons[0]?.userId ?? 0);
  const go = (changes: Readonly<Record<string, string>>): void =>
    setSearch((before) => {
      const next = new URLSearchParams(before);
      for (const [name, value] of Object.entries(changes)) next.set(name, value);
      next.delete('why');
      return next;
    });
  return (
    <Page
      title={formatMonth(month)}
      over="Surgeon fees"
      actions={
        <>
          <Button kind="quiet" onPress={() => go({ month: addMonths(month, -1) })}>
            Month before
          </Button>
          <Button kind="quiet" onPress={() => go({ month: addMonths(month, 1) })}>
            Month after
          </Button>
        </>
      }
    >
      {surgeons.data && surgeons.data.surgeons.length > 1 ? (
        <SelectField
          className="mb-6 max-w-sm"
          label="Surgeon"
          value={String(surgeonId)}
          onChange={(value) => go({ surgeon: value })}
          choices={surgeons.data.surgeons.map((each) => ({
            value: String(each.userId),
            label: `${each.name}, owed ${moneyText(each.payableMinor, surgeons.data.currency, true)}`,
          }))}
        />
      ) : null}
      {surgeons.isPending ? <Skeleton rows={6} label="Fetching the fees" /> : null}
      {surgeons.isError ? <ErrorState error={surgeons.error} retry={() => void surgeons.refetch()} /> : null}
      {surgeonId > 0 ? <Month surgeonId={surgeonId} month={month} /> : null}
      <Caution>
        A fee accrues when the eye is done and its share is paid, under the agreement version in force on that
        day. Figures are not advice; tax follows local law.
      </Caution>
    </Page>
  );
}

function Month({ surgeonId, month }: { readonly surgeonId: number; readonly month: ClinicDate }) {
  const query = useQuery(monthQuery(surgeonId, month));
  if (query.isPending) return <Skeleton rows={6} label="Fetching the month" />;
  if (query.isError) return <ErrorState error={query.error} retry={() => void query.refetch()} />;
  const fees = query.data;
  const days = [...new Set(fees.rows.map((row) => row.doneOn))];
  return (
    <>
      <p className="text-soft">{fees.surgeon.name}</p>
      <p className="mt-3 text-figure font-extrabold">
        <Figure id="total" amount={fees.totalMinor} currency={fees.currency} why={fees.totalWhy} alone />
      </p>
      <p className="text-small text-soft">
        accrued so far{fees.agreementVersion ? `, agreement version ${fees.agreementVersion}` : ''}
      </p>
      <div className="mt-4 max-w-xl">
        <DefinitionRows
          rows={[
            {
              label: `${fees.eyes} ${fees.eyes === 1 ? 'eye' : 'eyes'}`,
              value: moneyText(fees.accruedMinor, fees.currency),
            },
            ...(fees.clawedBackMinor === 0
              ? []
              : [{ label: 'Clawed back', value: moneyText(fees.clawedBackMinor, fees.currency) }]),
            ...(fees.heldCount === 0 ? [] : [{ label: `${fees.heldCount} held`, value: 'not due yet' }]),
            { label: 'Together', value: moneyText(fees.totalMinor, fees.currency), strong: true },
          ]}
        />
      </div>
      {days.length === 0 ? (
        <EmptyState title={`No eye was done in ${formatMonth(month)}`}>
          An eye appears here on the day it is recorded as done.
        </EmptyState>
      ) : (
        days.map((day) => (
          <Section key={day} title={formatDayWithWeekday(day)}>
            <ul className="max-w-xl">
              {fees.rows
                .filter((row) => row.doneOn === day)
                .map((row) => (
                  <FeeRow key={`${row.courseId}-${row.eye}-${row.kind}`} row={row} currency={fees.currency} />
                ))}
            </ul>
          </Section>
        ))
      )}
    </>
  );
}

function FeeRow({ row, currency }: { readonly row: FeeRowView; readonly currency: string }) {
  return (
    <li className="flex items-baseline gap-3 border-b border-rule py-2">
      <span className="w-10 self-center">
        <PairMark eyes={row.pair} />
      </span>
      <span className="min-w-0 grow">
        {row.patientInitials} <span className="text-small text-soft">{row.procedureName.toLowerCase()}</span>
        {row.heldReason ? (
          <span className="block text-small font-semibold text-povidone">held: {row.heldReason}</span>
        ) : null}
        {row.kind === 'clawback' ? <span className="block text-small text-soft">clawed back</span> : null}
      </span>
      <Figure
        id={`fee-${row.courseId}-${row.eye}-${row.kind}`}
        amount={row.amountMinor}
        currency={currency}
        why={row.why}
      />
    </li>
  );
}
