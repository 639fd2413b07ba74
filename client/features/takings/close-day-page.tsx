import { queryOptions, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { useSearchParams } from 'react-router-dom';
import { call, pathOf } from '#client/api/call.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { DateField, MoneyField, TextField } from '#client/ui/fields.tsx';
import { Money, moneyText } from '#client/ui/money.tsx';
import { Page, Section } from '#client/ui/page.tsx';
import { useSite } from '#client/ui/site.tsx';
import { ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { closeDay, countDay, type DayView, enterTerminalBatch, getDay } from '#contract/closing';
import { getDayClosePdf } from '#contract/documents';
import type { Minor } from '#domain/money/index';
import { type ClinicDate, formatDayShort, formatDayWithWeekday, isClinicDate } from '#domain/time/index';
import { DayTakings, DayTills } from './day-tables.tsx';

const dayQuery = (siteId: number, day: ClinicDate) =>
  queryOptions({
    queryKey: ['day', siteId, day],
    queryFn: ({ signal }) => call(getDay, { params: { siteId, day } }, signal),
  });

/** Tills and takings side by side with their proofs, what needs a person, and the close by two of them. */
export function CloseDayPage() {
  const site = useSite();
  const [search, setSearch] = useSearchParams();
  const asked = search.get('day') ?? '';
  const day = isClinicDate(asked) ? asked : site.businessDay;
  const query = useQuery(dayQuery(site.siteId, day));
  return (
    <Page
      title="Close the day"
      over={`${site.name}, ${formatDayWithWeekday(day)}`}
      lead={query.data ? leadOf(query.data) : null}
      actions={
        <DateField
          label="Day"
          value={day}
          onChange={(value) => {
            if (isClinicDate(value)) setSearch({ day: value });
          }}
        />
      }
    >
      {query.isPending ? <Skeleton rows={8} label="Fetching the day" /> : null}
      {query.isError ? <ErrorState error={query.error} retry={() => void query.refetch()} /> : null}
      {query.data ? <Day day={query.data} /> : null}
    </Page>
  );
}

function leadOf(day: DayView): string {
  const open = day.tills.filter((till) => till.state !== 'not_opened').length;
  const parts = [
    `${day.receiptCount} ${day.receiptCount === 1 ? 'receipt' : 'receipts'}`,
    `${open} ${open === 1 ? 'till' : 'tills'}`,
  ];
  if (day.lastClosed) parts.push(`last closed ${formatDayShort(day.lastClosed)}`);
  return parts.join(', ');
}

function Day({ day }: { readonly day: DayView }) {
  return (
    <>
      <p className="mb-6 text-right">
        <span className="block text-small text-soft">Difference</span>
        <span
          className={`tabular text-figure font-extrabold ${day.differenceMinor === 0 ? 'text-lissamine' : 'text-bengal'}`}
        >
          {day.differenceMinor === 0 ? 'ties' : moneyText(day.differenceMinor, day.currency)}
        </span>
      </p>
      <DayTills day={day} />
      <DayTakings day={day} />
      <Batch day={day} />
      {day.exceptions.length > 0 ? <Exceptions day={day} /> : null}
      <Close day={day} />
    </>
  );
}

/** After a change the answer is the day as it now stands. */
function useDayChange<Input>(day: DayView, run: (input: Input) => Promise<DayView>, said: string) {
  const client = useQueryClient();
  const announce = useAnnounce();
  return useMutation({
    mutationFn: run,
    onSuccess: (next) => {
      client.setQueryData(dayQuery(day.siteId, day.day).queryKey, next);
      announce(said);
    },
  });
}

function Batch({ day }: { readonly day: DayView }) {
  const taking = day.takings.find((each) => each.tender === 'card_machine');
  const [batchNo, setBatchNo] = useState('');
  const [amount, setAmount] = useState<Minor | null>(null);
  const [slips, setSlips] = useState('');
  const enter = useDayChange(
    day,
    () =>
      call(enterTerminalBatch, {
        params: { siteId: day.siteId, day: day.day },
        body: { batchNo, amountMinor: amount ?? 0, slips: Number.parseInt(slips || '0', 10) },
      }),
    'The batch is entered.',
  );
  const wanted = taking && (taking.proofMinor === null || taking.differenceMinor !== 0);
  if (!wanted || day.state === 'closed' || day.state === 'not_opened') return null;
  return (
    <Section title="The card machine’s batch">
      <form
        className="flex flex-wrap items-end gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          enter.mutate(undefined);
        }}
      >
        <TextField className="w-32" label="Batch number" value={batchNo} onChange={setBatchNo} required />
        <MoneyField
          className="w-40"
          label={`Total, ${day.currency}`}
          currency={day.currency}
          amount={amount}
          onAmount={setAmount}
        />
        <TextField className="w-24" label="Slips" inputMode="numeric" value={slips} onChange={setSlips} />
        <Button type="submit" sending={enter.isPending}>
          Enter the batch
        </Button>
      </form>
      <p className="mt-2 text-small text-soft">
        The same number again replaces what was entered; both stay on record.
      </p>
      {enter.error ? (
        <p role="alert" className="mt-2 font-semibold text-bengal">
          {enter.error.message}
        </p>
      ) : null}
    </Section>
  );
}

function Exceptions({ day }: { readonly day: DayView }) {
  return (
    <Section title="Needs a person">
      <ul>
        {day.exceptions.map((each) => (
          <li
            key={each.code + each.words}
            className="flex flex-wrap justify-between gap-x-6 gap-y-1 border-b border-rule py-2"
          >
            <span>{each.words}</span>
            <span className="flex items-baseline gap-6">
              {each.amountMinor === null ? null : <Money amount={each.amountMinor} currency={day.currency} />}
              {each.blocking ? (
                <StateWord tone="wrong">holds up the close</StateWord>
              ) : (
                <StateWord tone="waiting">does not hold up the close</StateWord>
              )}
            </span>
          </li>
        ))}
      </ul>
    </Section>
  );
}

function Close({ day }: { readonly day: DayView }) {
  const params = { siteId: day.siteId, day: day.day };
  const count = useDayChange(
    day,
    () => call(countDay, { params }),
    'The day is counted; a second person closes it.',
  );
  const close = useDayChange(day, () => call(closeDay, { params }), 'The day is closed.');
  const problem = count.error ?? close.error;
  const blocking = day.exceptions.filter((each) => each.blocking).length;
  return (
    <div className="mt-10">
      {day.closes.map((each) => (
        <p key={each.dayCloseId} className="mb-4">
          <StateWord tone="settled">closed</StateWord> by {each.askedBy} and {each.closedBy}.{' '}
          <a
            href={pathOf(getDayClosePdf, { params: { dayCloseId: each.dayCloseId } })}
            target="_blank"
            rel="noreferrer"
          >
            Report as PDF
          </a>
        </p>
      ))}
      {day.state === 'not_opened' ? (
        <p className="text-soft">Nothing has happened on this day; there is nothing to close.</p>
      ) : null}
      {day.state === 'open' ? (
        <div className="flex flex-wrap items-center gap-4">
          <Button
            kind="primary"
            disabled={!day.mayClose}
            sending={count.isPending}
            onPress={() => count.mutate(undefined)}
          >
            The day is complete
          </Button>
          <span className="text-small text-soft">
            {blocking === 0
              ? 'Then a second person closes it.'
              : `${blocking} ${blocking === 1 ? 'thing holds' : 'things hold'} it up.`}
          </span>
        </div>
      ) : null}
      {day.state === 'counted' ? (
        <div className="flex flex-wrap items-center gap-4">
          <Button
            kind="primary"
            disabled={day.countedByMe}
            sending={close.isPending}
            onPress={() => close.mutate(undefined)}
          >
            Close the day
          </Button>
          <span className="text-small text-soft">
            {day.countedByMe
              ? 'You said it is complete; another person closes it.'
              : `${day.countedBy} said it is complete. Nothing is booked on it once it is closed.`}
          </span>
        </div>
      ) : null}
      {problem ? (
        <p role="alert" className="mt-4 font-semibold text-bengal">
          {problem.message}
        </p>
      ) : null}
    </div>
  );
}
