import { queryOptions, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page, Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { Tie } from '#client/ui/tie.tsx';
import { listPayouts, pullPayouts } from '#contract/bank';
import { formatDayShort } from '#domain/time/index';
import { MovementsTable } from './movements-table.tsx';

const payoutsQuery = queryOptions({
  queryKey: ['payouts'],
  queryFn: ({ signal }) => call(listPayouts, {}, signal),
});

/** What the processor paid out, tied to what was taken, and what waits there. */
export function BankPage() {
  const payouts = useQuery(payoutsQuery);
  const client = useQueryClient();
  const announce = useAnnounce();
  const roles = useSession().person?.roles ?? [];
  const pull = useMutation({
    mutationFn: () => call(pullPayouts, {}),
    onSuccess: async ({ tied }) => {
      announce(
        tied === 0 ? 'Nothing new was paid out.' : `${tied} ${tied === 1 ? 'payout' : 'payouts'} tied.`,
      );
      await client.invalidateQueries(payoutsQuery);
    },
  });
  const data = payouts.data;
  const currency = data?.payouts[0]?.currency ?? 'EUR';
  return (
    <Page
      title="Bank"
      lead="Payouts of the card partner, each tied to its receipts."
      actions={
        roles.includes('front_desk') || roles.includes('manager') ? (
          <Button sending={pull.isPending} onPress={() => pull.mutate()}>
            Ask for payouts now
          </Button>
        ) : null
      }
    >
      {pull.error ? (
        <p role="alert" className="mb-4 font-semibold text-bengal">
          {pull.error.message}
        </p>
      ) : null}
      {payouts.isPending ? <Skeleton rows={8} label="Fetching payouts" /> : null}
      {payouts.isError ? <ErrorState error={payouts.error} retry={() => void payouts.refetch()} /> : null}
      {data ? (
        <>
          <Section
            title="Waiting at the card partner"
            aside={
              <span className="text-small text-soft">
                online clearing by the books <Money amount={data.onlineClearingMinor} currency={currency} />
              </span>
            }
          >
            {data.waiting.length === 0 ? (
              <EmptyState title="Nothing waits">Every online payment has been paid out.</EmptyState>
            ) : (
              <MovementsTable
                lines={data.waiting}
                currency={currency}
                caption="Waiting at the card partner"
              />
            )}
          </Section>
          <Section title="Paid out">
            {data.payouts.length === 0 ? (
              <EmptyState title="No payout yet">
                The card partner pays out a few days after a payment.
              </EmptyState>
            ) : (
              <SheetTable
                caption="Payouts"
                rows={data.payouts}
                rowKey={(payout) => payout.payoutId}
                columns={[
                  {
                    id: 'on',
                    head: 'Arrives',
                    cell: (payout) => (
                      <Link to={`/bank/payouts/${payout.payoutId}`}>{formatDayShort(payout.arrivesOn)}</Link>
                    ),
                  },
                  {
                    id: 'state',
                    head: 'State',
                    wide: true,
                    cell: (payout) => (
                      <StateWord
                        tone={
                          payout.state === 'paid'
                            ? 'settled'
                            : payout.state === 'failed'
                              ? 'wrong'
                              : 'waiting'
                        }
                      >
                        {payout.state.replace('_', ' ')}
                      </StateWord>
                    ),
                  },
                  {
                    id: 'amount',
                    head: `Paid out, ${currency}`,
                    align: 'right',
                    cell: (payout) =>
                      payout.tied ? (
                        <Figure
                          id={`payout-${payout.payoutId}`}
                          amount={payout.amountMinor}
                          currency={payout.currency}
                          why={payout.why}
                        />
                      ) : (
                        <Money amount={payout.amountMinor} currency={payout.currency} />
                      ),
                  },
                  {
                    id: 'tie',
                    head: 'Its movements',
                    align: 'right',
                    cell: (payout) => (
                      <Tie
                        difference={payout.tied ? payout.differenceMinor : null}
                        currency={payout.currency}
                        awaited
                      />
                    ),
                  },
                ]}
              />
            )}
          </Section>
        </>
      ) : null}
    </Page>
  );
}
