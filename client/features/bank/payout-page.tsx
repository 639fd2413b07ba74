import { useQuery } from '@tanstack/react-query';
import { Link, useParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { Page } from '#client/ui/page.tsx';
import { ErrorState, Skeleton } from '#client/ui/states.tsx';
import { getPayout } from '#contract/bank';
import { formatDay } from '#domain/time/index';
import { MovementsTable } from './movements-table.tsx';

/** One payout and every movement in it. */
export function PayoutPage() {
  const payoutId = Number(useParams().payoutId);
  const payout = useQuery({
    queryKey: ['payout', payoutId],
    queryFn: ({ signal }) => call(getPayout, { params: { payoutId } }, signal),
  });
  return (
    <Page
      title={payout.data ? `Payout of ${formatDay(payout.data.payout.arrivesOn)}` : 'Payout'}
      over={<Link to="/bank">Bank</Link>}
      lead={payout.data?.payout.state}
    >
      {payout.isPending ? <Skeleton rows={6} label="Fetching the payout" /> : null}
      {payout.isError ? <ErrorState error={payout.error} retry={() => void payout.refetch()} /> : null}
      {payout.data ? (
        <MovementsTable
          lines={payout.data.lines}
          currency={payout.data.payout.currency}
          caption="Movements of the payout"
        />
      ) : null}
    </Page>
  );
}
