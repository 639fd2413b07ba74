import { queryOptions, useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { LinkButton } from '#client/ui/button.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page, Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { listReceipts, type ReceiptView } from '#contract/payments';
import { listTills } from '#contract/tills';
import { TENDER_LABEL } from '#domain/payments/index';
import { formatTime } from '#domain/time/index';
import { TillSection } from './till-section.tsx';

const tillsQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['tills', siteId],
    queryFn: ({ signal }) => call(listTills, { params: { siteId } }, signal),
  });

/** The day's tills, from float to close, and its receipts. */
export function TakingsPage() {
  const site = useSite();
  const tills = useQuery(tillsQuery(site.siteId));
  const receipts = useQuery({
    queryKey: ['receipts', site.siteId, site.businessDay],
    queryFn: ({ signal }) =>
      call(listReceipts, { params: { siteId: site.siteId }, query: { day: site.businessDay } }, signal),
  });
  return (
    <Page
      title="Takings"
      over={site.name}
      lead="Tills counted blind, receipts of the day."
      actions={
        <LinkButton kind="primary" to="/takings/close">
          Close the day
        </LinkButton>
      }
    >
      {tills.isPending ? <Skeleton rows={4} label="Fetching the tills" /> : null}
      {tills.isError ? <ErrorState error={tills.error} retry={() => void tills.refetch()} /> : null}
      {tills.data?.tills.map((till) => (
        <TillSection key={till.tillId} till={till} answer={tills.data} />
      ))}
      <Section title="Receipts of the day">
        {receipts.isPending ? <Skeleton rows={4} label="Fetching the receipts" /> : null}
        {receipts.isError ? (
          <ErrorState error={receipts.error} retry={() => void receipts.refetch()} />
        ) : null}
        {receipts.data ? <Receipts receipts={receipts.data.receipts} zone={site.zone} /> : null}
      </Section>
    </Page>
  );
}

function Receipts({ receipts, zone }: { readonly receipts: readonly ReceiptView[]; readonly zone: string }) {
  if (receipts.length === 0)
    return <EmptyState title="No receipt yet today">Payments at the desk and online appear here.</EmptyState>;
  const currency = receipts[0]?.currency ?? 'EUR';
  return (
    <SheetTable
      caption="Receipts of the day"
      rows={receipts}
      rowKey={(receipt) => receipt.receiptId}
      columns={[
        {
          id: 'number',
          head: 'Receipt',
          cell: (receipt) => <Link to={`/takings/receipts/${receipt.receiptId}`}>{receipt.number}</Link>,
        },
        { id: 'at', head: 'At', wide: true, cell: (receipt) => formatTime(receipt.recordedAt, zone) },
        { id: 'payer', head: 'Paid by', cell: (receipt) => receipt.payerName },
        {
          id: 'by',
          head: 'By',
          wide: true,
          cell: (receipt) =>
            receipt.tenders.map((tender) => TENDER_LABEL[tender.tender].toLowerCase()).join(', '),
        },
        {
          id: 'amount',
          head: `Received, ${currency}`,
          align: 'right',
          cell: (receipt) => <Money amount={receipt.totalMinor} currency={currency} />,
        },
        {
          id: 'state',
          head: 'State',
          cell: (receipt) =>
            receipt.voided ? (
              <StateWord tone="wrong">void</StateWord>
            ) : (
              <StateWord tone="settled">taken</StateWord>
            ),
        },
      ]}
    />
  );
}
