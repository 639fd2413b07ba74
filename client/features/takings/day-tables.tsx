import { Link } from 'react-router-dom';
import { Figure } from '#client/ui/figure.tsx';
import { Money, moneyText } from '#client/ui/money.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { StateWord } from '#client/ui/states.tsx';
import { Tie } from '#client/ui/tie.tsx';
import type { DayView } from '#contract/closing';
import { TENDER_LABEL } from '#domain/payments/index';

/** The day's tills: should hold, holds, difference, next step. */
export function DayTills({ day }: { readonly day: DayView }) {
  return (
    <SheetTable
      caption="Tills"
      rows={day.tills}
      rowKey={(till) => `${till.tillId}-${till.tillSessionId ?? 0}`}
      columns={[
        { id: 'name', head: 'Tills', cell: (till) => till.name },
        {
          id: 'should',
          head: `Should hold, ${day.currency}`,
          align: 'right',
          cell: (till) =>
            till.shouldHoldMinor !== null && till.shouldHoldWhy !== null ? (
              <Figure
                id={`till-${till.tillSessionId}`}
                amount={till.shouldHoldMinor}
                currency={day.currency}
                why={{
                  ...till.shouldHoldWhy,
                  title: `${till.name} should hold ${moneyText(till.shouldHoldMinor, day.currency)}`,
                }}
              />
            ) : (
              <span className="text-small text-soft">{till.state === 'open' ? 'after the count' : '–'}</span>
            ),
        },
        {
          id: 'holds',
          head: `Holds, ${day.currency}`,
          align: 'right',
          cell: (till) =>
            till.holdsMinor === null ? '–' : <Money amount={till.holdsMinor} currency={day.currency} />,
        },
        {
          id: 'difference',
          head: 'Difference',
          align: 'right',
          cell: (till) => <Tie difference={till.differenceMinor} currency={day.currency} />,
        },
        { id: 'next', head: 'Next', wide: true, cell: (till) => <TillNext till={till} /> },
      ]}
    />
  );
}

function TillNext({ till }: { readonly till: DayView['tills'][number] }) {
  if (till.state === 'not_opened') return <span className="text-small text-soft">not opened today</span>;
  if (till.state === 'closed') {
    return (
      <span className="text-small text-soft">
        counted by {till.countedBy}, closed by {till.closedBy}
        {till.reason ? `: ${till.reason}` : ''}
      </span>
    );
  }
  return (
    <Link to="/takings">
      {till.state === 'open'
        ? 'Count it'
        : till.differenceMinor !== 0 && !till.reason
          ? 'Give a reason'
          : 'Close it'}
    </Link>
  );
}

/** The day's takings by tender beside their proofs. */
export function DayTakings({ day }: { readonly day: DayView }) {
  return (
    <div className="mt-8">
      <SheetTable
        caption="Taken"
        rows={day.takings}
        rowKey={(taking) => taking.tender}
        columns={[
          { id: 'tender', head: 'Taken', cell: (taking) => TENDER_LABEL[taking.tender] },
          {
            id: 'receipts',
            head: `Receipts, ${day.currency}`,
            align: 'right',
            cell: (taking) => (
              <Figure
                id={`taken-${taking.tender}`}
                amount={taking.receiptsMinor}
                currency={day.currency}
                why={taking.receiptsWhy}
              />
            ),
          },
          {
            id: 'proof',
            head: `Proof, ${day.currency}`,
            align: 'right',
            cell: (taking) =>
              taking.proofMinor === null ? (
                <StateWord tone="waiting">awaited</StateWord>
              ) : (
                <Money amount={taking.proofMinor} currency={day.currency} />
              ),
          },
          {
            id: 'difference',
            head: 'Difference',
            align: 'right',
            cell: (taking) => <Tie difference={taking.differenceMinor} currency={day.currency} />,
          },
          {
            id: 'by',
            head: 'By',
            wide: true,
            cell: (taking) => <span className="text-small text-soft">{taking.by}</span>,
          },
        ]}
        total={
          <tr>
            <th scope="row" className="py-3 text-left">
              Together
            </th>
            <td className="tabular py-3 pr-4 text-right">
              <Money amount={day.togetherMinor} currency={day.currency} />
            </td>
            <td colSpan={3} />
          </tr>
        }
      />
    </div>
  );
}
