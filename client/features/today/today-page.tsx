import { queryOptions, useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { LinkButton } from '#client/ui/button.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page, Section } from '#client/ui/page.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { Caution, EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { getToday, type TodayView } from '#contract/today';
import { formatDayShort, formatDayWithWeekday, formatTime } from '#domain/time/index';

const todayQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['today', siteId],
    queryFn: ({ signal }) => call(getToday, { params: { siteId } }, signal),
  });

/** The front desk's day: who comes, what each owes before the surgeon may start, who paid online since this morning. */
export function TodayPage() {
  const site = useSite();
  const today = useQuery(todayQuery(site.siteId));
  const lead = today.data ? summary(today.data) : 'Who comes, what each owes, who has paid.';
  return (
    <Page title={formatDayWithWeekday(site.businessDay)} over={site.name} lead={lead} shortcuts={[]}>
      {today.isPending ? <Skeleton rows={6} label="Fetching today" /> : null}
      {today.isError ? <ErrorState error={today.error} retry={() => void today.refetch()} /> : null}
      {today.data ? <Day today={today.data} zone={site.zone} /> : null}
      <Caution>
        Whether and when an eye is treated is the surgeon’s decision. This page only says what is paid.
      </Caution>
    </Page>
  );
}

function summary(today: TodayView): string {
  const owing = today.surgery.filter((row) => row.owedMinor > 0).length;
  const parts = [
    `${today.surgery.length} ${today.surgery.length === 1 ? 'patient' : 'patients'} for surgery`,
    owing === 0 ? 'nothing owed before it' : `${owing} ${owing === 1 ? 'owes' : 'owe'} before it`,
    `${today.paidOnline.length} paid online`,
  ];
  if (today.approvalsWaiting > 0) parts.push(`${today.approvalsWaiting} waiting for a second person`);
  return parts.join(' · ');
}

function Day({ today, zone }: { readonly today: TodayView; readonly zone: string }) {
  const { currency } = today;
  return (
    <>
      <Section title="Surgery today">
        {today.surgery.length === 0 ? (
          <EmptyState title="Nobody has surgery at this site today">
            Patients appear here on the day their eye is planned for.
          </EmptyState>
        ) : (
          <SheetTable
            caption="Surgery today"
            rows={today.surgery}
            rowKey={(row) => row.courseId}
            columns={[
              {
                id: 'pair',
                head: <span className="sr-only">Eyes</span>,
                cell: (row) => <PairMark eyes={row.eyes} />,
                width: 'w-12',
              },
              {
                id: 'name',
                head: 'Patient',
                cell: (row) => <Link to={`/courses/${row.courseId}`}>{row.patientName}</Link>,
              },
              {
                id: 'what',
                head: 'Today',
                cell: (row) => (
                  <span className="text-small text-soft">
                    {eyesWords(row.eyesToday)}, {row.procedures.toLowerCase()}
                  </span>
                ),
                wide: true,
              },
              { id: 'surgeon', head: 'Surgeon', cell: (row) => row.surgeonName, wide: true },
              {
                id: 'owed',
                head: `Owed before surgery, ${currency}`,
                align: 'right',
                cell: (row) => (
                  <Figure
                    id={`owed-${row.courseId}`}
                    amount={row.owedMinor}
                    currency={currency}
                    why={row.owedWhy}
                  />
                ),
              },
              {
                id: 'next',
                head: 'Next',
                cell: (row) =>
                  row.owedMinor > 0 ? (
                    <Link to={`/courses/${row.courseId}/pay`}>Take payment</Link>
                  ) : row.eyes.some((eye) => eye.state === 'planned') ? (
                    <StateWord tone="settled">paid, may start</StateWord>
                  ) : (
                    <StateWord tone="plain">done</StateWord>
                  ),
              },
            ]}
          />
        )}
      </Section>
      <Section title="Paid online since this morning">
        {today.paidOnline.length === 0 ? (
          <EmptyState title="No online payment yet today">
            It appears here by itself, seconds after a patient has paid.
          </EmptyState>
        ) : (
          <SheetTable
            caption="Paid online since this morning"
            rows={today.paidOnline}
            rowKey={(row) => row.receiptId}
            columns={[
              { id: 'at', head: 'At', cell: (row) => formatTime(row.recordedAt, zone), width: 'w-16' },
              {
                id: 'name',
                head: 'Patient',
                cell: (row) => <Link to={`/courses/${row.courseId}`}>{row.patientName}</Link>,
              },
              { id: 'what', head: 'For', cell: (row) => row.purpose, wide: true },
              {
                id: 'number',
                head: 'Receipt',
                cell: (row) => <Link to={`/takings/receipts/${row.receiptId}`}>{row.number}</Link>,
              },
              {
                id: 'amount',
                head: `Paid, ${currency}`,
                align: 'right',
                cell: (row) => <Money amount={row.totalMinor} currency={currency} />,
              },
            ]}
          />
        )}
      </Section>
      {today.dueNow.length > 0 ? (
        <Section title="Due and not paid">
          <SheetTable
            caption="Due and not paid"
            rows={today.dueNow}
            rowKey={(row) => row.courseId}
            columns={[
              {
                id: 'name',
                head: 'Patient',
                cell: (row) => <Link to={`/courses/${row.courseId}`}>{row.patientName}</Link>,
              },
              { id: 'since', head: 'Due since', cell: (row) => formatDayShort(row.since) },
              {
                id: 'due',
                head: `Due, ${currency}`,
                align: 'right',
                cell: (row) => <Money amount={row.dueMinor} currency={currency} />,
              },
              {
                id: 'next',
                head: 'Next',
                cell: (row) => <Link to={`/courses/${row.courseId}/pay`}>Take payment</Link>,
              },
            ]}
          />
        </Section>
      ) : null}
      {today.accepted.length > 0 ? (
        <Section title="Accepted today">
          <SheetTable
            caption="Accepted today"
            rows={today.accepted}
            rowKey={(row) => row.courseId}
            columns={[
              { id: 'at', head: 'At', cell: (row) => formatTime(row.acceptedAt, zone), width: 'w-16' },
              {
                id: 'name',
                head: 'Patient',
                cell: (row) => <Link to={`/courses/${row.courseId}`}>{row.patientName}</Link>,
              },
              { id: 'course', head: 'Course', cell: (row) => row.courseNumber, wide: true },
              {
                id: 'total',
                head: `Price, ${currency}`,
                align: 'right',
                cell: (row) => <Money amount={row.totalMinor} currency={currency} />,
              },
            ]}
          />
        </Section>
      ) : null}
      <div className="mt-10">
        <LinkButton to="/takings/close">Close the day</LinkButton>
      </div>
    </>
  );
}

function eyesWords(eyes: readonly ('OD' | 'OS')[]): string {
  if (eyes.length === 2) return 'both eyes';
  return eyes[0] === 'OD' ? 'right eye' : 'left eye';
}
