import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import type { Laterality } from '#domain/eye';
import { currencySign } from '#domain/money/index';
import { explainLine, type PricedCourse } from '#domain/pricing/index';
import { columnWhy, totalWhy } from './derivations.ts';
import { type TableRow, tableRows } from './table-rows.ts';
import { toPayWords } from './words.ts';

const HEADS: Readonly<Record<Laterality, string>> = { OD: 'OD', OS: 'OS', OU: 'Both' };

type Row = TableRow | 'together';

/** The price line by line in the columns of the eyes; every figure says why in the margin. */
export function PricedTable({ course, title }: { readonly course: PricedCourse; readonly title: string }) {
  const columns = (['OD', 'OS', 'OU'] as const).filter((column) =>
    course.lines.some((line) => line.laterality === column),
  );
  const sign = currencySign(course.currency);
  const money = columns.map(
    (column): SheetColumn<Row> => ({
      id: column,
      head: `${HEADS[column]}, ${sign}`,
      align: 'right',
      cell: (row) => <Cell row={row} column={column} course={course} />,
    }),
  );
  return (
    <SheetTable<Row>
      caption={title}
      columns={[{ id: 'row', head: title, cell: (row) => <RowName row={row} /> }, ...money]}
      rows={[...tableRows(course.lines), 'together']}
      rowKey={(row) => (row === 'together' ? row : row.row)}
      total={
        <tr>
          <th scope="row" colSpan={columns.length} className="py-3 text-left font-extrabold">
            {toPayWords(course)}
          </th>
          <td className="py-3 text-right">
            <Figure id="total" amount={course.totalMinor} currency={course.currency} why={totalWhy(course)} />
          </td>
        </tr>
      }
    />
  );
}

function RowName({ row }: { readonly row: Row }) {
  if (row === 'together') return <span className="text-small text-soft">Together</span>;
  return (
    <>
      {row.label} {row.detail ? <span className="text-small text-soft">{row.detail}</span> : null}
    </>
  );
}

function Cell({
  row,
  column,
  course,
}: {
  readonly row: Row;
  readonly column: Laterality;
  readonly course: PricedCourse;
}) {
  if (row === 'together') {
    return (
      <Figure
        id={`together-${column}`}
        amount={course.columns[column]}
        currency={course.currency}
        why={columnWhy(course, column)}
      />
    );
  }
  const line = row.cells[column];
  if (!line) return null;
  return line.amountMinor === 0 && line.why.length === 0 ? (
    <Money amount={line.amountMinor} currency={course.currency} />
  ) : (
    <Figure
      id={line.id}
      amount={line.amountMinor}
      currency={course.currency}
      why={explainLine(line, course)}
    />
  );
}
