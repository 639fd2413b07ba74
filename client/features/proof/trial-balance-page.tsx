import { useQuery } from '@tanstack/react-query';
import { Link, useSearchParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { DateField } from '#client/ui/fields.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { EmptyState, ErrorState, Skeleton } from '#client/ui/states.tsx';
import { getTrialBalance } from '#contract/ledger';
import { formatDay, isClinicDate } from '#domain/time/index';

/** Debits and credits of every account, as of any day. */
export function TrialBalancePage() {
  const site = useSite();
  const [search, setSearch] = useSearchParams();
  const asked = search.get('asOf') ?? '';
  const asOf = isClinicDate(asked) ? asked : site.businessDay;
  const balance = useQuery({
    queryKey: ['trial-balance', asOf],
    queryFn: ({ signal }) => call(getTrialBalance, { query: { asOf } }, signal),
  });
  const currency = balance.data?.rows[0]?.currency ?? 'EUR';
  return (
    <Page
      title="Trial balance"
      over={<Link to="/proof">Proof</Link>}
      lead={`as of ${formatDay(asOf)}, every site you work at`}
      actions={
        <DateField
          label="As of"
          value={asOf}
          onChange={(value) => (isClinicDate(value) ? setSearch({ asOf: value }) : undefined)}
        />
      }
    >
      {balance.isPending ? <Skeleton rows={12} label="Adding up" /> : null}
      {balance.isError ? <ErrorState error={balance.error} retry={() => void balance.refetch()} /> : null}
      {balance.data?.rows.length === 0 ? <EmptyState title="Nothing was posted by this day" /> : null}
      {balance.data && balance.data.rows.length > 0 ? (
        <SheetTable
          caption="Trial balance"
          rows={balance.data.rows}
          rowKey={(row) => `${row.account}-${row.currency}`}
          columns={[
            {
              id: 'account',
              head: 'Account',
              cell: (row) => <Link to={`/proof/journal?account=${row.account}`}>{row.account}</Link>,
              width: 'w-20',
            },
            { id: 'name', head: 'Name', cell: (row) => row.name },
            {
              id: 'kind',
              head: 'Kind',
              cell: (row) => <span className="text-soft">{row.kind}</span>,
              wide: true,
            },
            {
              id: 'debit',
              head: `Debit, ${currency}`,
              align: 'right',
              cell: (row) =>
                row.debitMinor === 0 ? '' : <Money amount={row.debitMinor} currency={row.currency} />,
            },
            {
              id: 'credit',
              head: `Credit, ${currency}`,
              align: 'right',
              cell: (row) =>
                row.creditMinor === 0 ? '' : <Money amount={row.creditMinor} currency={row.currency} />,
            },
          ]}
          total={
            <tr>
              <th scope="row" colSpan={2} className="py-3 text-left">
                Together
              </th>
              <td className="max-md:hidden" />
              <td className="py-3 pr-4 text-right">
                <Money amount={balance.data.debitMinor} currency={currency} />
              </td>
              <td className="py-3 text-right">
                <Money amount={balance.data.creditMinor} currency={currency} />
              </td>
            </tr>
          }
        />
      ) : null}
    </Page>
  );
}
