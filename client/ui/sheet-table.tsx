import type { ReactNode } from 'react';

export interface SheetColumn<Row> {
  readonly id: string;
  readonly head: ReactNode;
  readonly cell: (row: Row) => ReactNode;
  /** Figures stand right. */
  readonly align?: 'left' | 'right';
  /** Left out on a phone, where the row says enough without it. */
  readonly wide?: boolean;
  readonly width?: string;
}

export interface SheetTableProps<Row> {
  readonly caption: string;
  readonly columns: readonly SheetColumn<Row>[];
  readonly rows: readonly Row[];
  readonly rowKey: (row: Row) => string | number;
  /** The last, heavier row: totals. */
  readonly total?: ReactNode;
  /** Shows the caption; else only screen readers have it. */
  readonly showCaption?: boolean;
}

/** A ruled table for a sheet: figures right, a heavy rule under the head and over the total. */
export function SheetTable<Row>({
  caption,
  columns,
  rows,
  rowKey,
  total,
  showCaption = false,
}: SheetTableProps<Row>) {
  return (
    <div className="relative overflow-x-auto">
      <table className="w-full border-collapse text-body">
        <caption className={showCaption ? 'pb-2 text-left text-lead font-extrabold' : 'sr-only'}>
          {caption}
        </caption>
        <thead>
          <tr className="border-b-2 border-ink">
            {columns.map((column) => (
              <th
                key={column.id}
                scope="col"
                className={`py-2 pr-4 align-bottom text-small font-semibold text-soft last:pr-0 ${column.align === 'right' ? 'text-right' : 'text-left'} ${column.wide ? 'max-md:hidden' : ''} ${column.width ?? ''}`}
              >
                {column.head}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={rowKey(row)} className="border-b border-rule">
              {columns.map((column) => (
                <td
                  key={column.id}
                  className={`py-2 pr-4 align-baseline last:pr-0 ${column.align === 'right' ? 'tabular text-right' : ''} ${column.wide ? 'max-md:hidden' : ''}`}
                >
                  {column.cell(row)}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
        {total ? <tfoot className="border-t-2 border-ink text-lead font-extrabold">{total}</tfoot> : null}
      </table>
    </div>
  );
}
