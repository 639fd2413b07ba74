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
  const rows: Row[] = tableRows(course.lines);
  if (columns.length > 1) rows.push('together');
  return (
    <div className="mt-6">
      <div className="max-md:hidden">
        <WideTable course={course} title={title} columns={columns} rows={rows} />
      </div>
      <div className="md:hidden">
        <NarrowTable course={course} title={title} columns={columns} rows={rows} />
      </div>
    </div>
  );
}

interface TableProps {
  readonly course: PricedCourse;
  readonly title: string;
  readonly columns: readonly Laterality[];
  readonly rows: readonly Row[];
}

const rowKey = (row: Row): string => (row === 'together' ? row : row.row);

/** A column for each eye and one for both. */
function WideTable({ course, title, columns, rows }: TableProps) {
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
      rows={rows}
      rowKey={rowKey}
      total={<TotalRow course={course} before={columns.length} />}
    />
  );
}

/** On a phone the columns stand under one another, each figure with its eye. */
function NarrowTable({ course, title, columns, rows }: TableProps) {
  const amounts = (row: Row) => (
    <ul>
      {columns
        .filter((column) => row === 'together' || row.cells[column])
        .map((column) => (
          <li key={column} className="whitespace-nowrap">
            <span className="mr-2 text-small text-soft">{HEADS[column]}</span>
            <Cell row={row} column={column} course={course} />
          </li>
        ))}
    </ul>
  );
  return (
    <SheetTable<Row>
      caption={title}
      columns={[
        { id: 'row', head: title, cell: (row) => <RowName row={row} /> },
        { id: 'amount', head: currencySign(course.currency), align: 'right', cell: amounts },
      ]}
      rows={rows}
      rowKey={rowKey}
      total={<TotalRow course={course} before={1} />}
    />
  );
}

function TotalRow({ course, before }: { readonly course: PricedCourse; readonly before: number }) {
  return (
    <tr>
      <th scope="row" colSpan={before} className="py-3 text-left font-extrabold">
        {toPayWords(course)}
      </th>
      <td className="py-3 text-right">
        <Figure id="total" amount={course.totalMinor} currency={course.currency} why={totalWhy(course)} />
      </td>
    </tr>
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
