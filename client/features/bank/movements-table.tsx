import { Link } from 'react-router-dom';
import { Money } from '#client/ui/money.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import type { PayoutLineView } from '#contract/bank';
import { formatDayShort } from '#domain/time/index';

/** The card partner's movements: gross, fee, net, each with its receipt. */
export function MovementsTable({
  lines,
  currency,
  caption,
}: {
  readonly lines: readonly PayoutLineView[];
  readonly currency: string;
  readonly caption: string;
}) {
  const net = lines.reduce((sum, line) => sum + line.netMinor, 0);
  return (
    <SheetTable
      caption={caption}
      rows={lines}
      rowKey={(line) => line.balanceTransactionId}
      columns={[
        { id: 'on', head: 'On', cell: (line) => formatDayShort(line.happenedOn) },
        {
          id: 'receipt',
          head: 'Receipt',
          cell: (line) =>
            line.receiptId ? (
              <Link to={`/takings/receipts/${line.receiptId}`}>{line.receiptNumber}</Link>
            ) : (
              line.category.replace('_', ' ')
            ),
        },
        { id: 'payer', head: 'Paid by', wide: true, cell: (line) => line.payerName ?? '' },
        {
          id: 'gross',
          head: `Gross, ${currency}`,
          align: 'right',
          wide: true,
          cell: (line) => <Money amount={line.grossMinor} currency={currency} />,
        },
        {
          id: 'fee',
          head: `Fee, ${currency}`,
          align: 'right',
          wide: true,
          cell: (line) => <Money amount={-line.feeMinor} currency={currency} />,
        },
        {
          id: 'net',
          head: `Net, ${currency}`,
          align: 'right',
          cell: (line) => <Money amount={line.netMinor} currency={currency} />,
        },
      ]}
      total={
        <tr>
          <th scope="row" colSpan={2} className="py-3 text-left">
            Together
          </th>
          <td colSpan={3} className="max-md:hidden" />
          <td className="py-3 text-right">
            <Money amount={net} currency={currency} />
          </td>
        </tr>
      }
    />
  );
}
