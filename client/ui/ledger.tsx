import {
  columnFilteringFeature,
  createFilteredRowModel,
  createSortedRowModel,
  globalFilteringFeature,
  rowSortingFeature,
  tableFeatures,
  useTable,
} from '@tanstack/react-table';
import { useVirtualizer } from '@tanstack/react-virtual';
import { type KeyboardEvent, type ReactNode, useMemo, useRef, useState } from 'react';
import { Button } from './button.tsx';
import { csvOf } from './csv.ts';
import { TextField } from './fields.tsx';
import { EmptyState } from './states.tsx';

export interface LedgerColumn<Row> {
  readonly id: string;
  readonly head: string;
  /** What is sorted, filtered and exported; money as its number of minor units sorts right. */
  readonly value: (row: Row) => string | number;
  readonly cell?: (row: Row) => ReactNode;
  /** How the value stands in the CSV, where not as it is. */
  readonly csv?: (row: Row) => string;
  readonly align?: 'left' | 'right';
  readonly wide?: boolean;
  /** A CSS grid track: "6rem", "1fr". */
  readonly width: string;
}

export interface LedgerProps<Row> {
  readonly caption: string;
  readonly columns: readonly LedgerColumn<Row>[];
  readonly rows: readonly Row[];
  readonly onOpen?: (row: Row) => void;
  readonly filename: string;
  /** The last row, sticking to the bottom: one text per column. */
  readonly total?: readonly ReactNode[];
}

const FEATURES = tableFeatures({
  rowSortingFeature,
  columnFilteringFeature,
  globalFilteringFeature,
  sortedRowModel: createSortedRowModel(),
  filteredRowModel: createFilteredRowModel(),
});

const ROW_PX = 40;

/**
 * A long ruled table: sorted by its heads, filtered by words, walked by arrow keys, opened by Enter, exported as CSV. Only the rows in
 * sight are drawn, so that ten thousand stay smooth.
 */
export function Ledger<Row>({ caption, columns, rows, onOpen, filename, total }: LedgerProps<Row>) {
  const [words, setWords] = useState('');
  const [sorting, setSorting] = useState<{ id: string; desc: boolean }[]>([]);
  const table = useTable({
    features: FEATURES,
    data: rows as never,
    columns: useMemo(
      () => columns.map((column) => ({ id: column.id, accessorFn: column.value })),
      [columns],
    ) as never,
    state: { sorting, globalFilter: words } as never,
    onSortingChange: setSorting as never,
    globalFilterFn: ((row: { original: Row }, _id: string, needle: string) =>
      matches(columns, row.original, needle)) as never,
  });
  const shown = table.getRowModel().rows as unknown as readonly { id: string; original: Row }[];
  const tracks = columns.map((column) => column.width).join(' ');
  const turn = (id: string): void =>
    setSorting(([now]) => (now?.id !== id ? [{ id, desc: false }] : now.desc ? [] : [{ id, desc: true }]));
  return (
    <div>
      <div className="mb-3 flex flex-wrap items-end justify-between gap-4">
        <TextField
          className="w-64"
          label={`Find in ${caption.toLowerCase()}`}
          value={words}
          onChange={setWords}
        />
        <Button
          kind="quiet"
          onPress={() =>
            save(
              filename,
              csvOf([
                columns.map((column) => column.head),
                ...shown.map(({ original }) =>
                  columns.map((column) => column.csv?.(original) ?? String(column.value(original))),
                ),
              ]),
            )
          }
        >
          Save {shown.length} rows as CSV
        </Button>
      </div>
      <div role="table" aria-label={caption} aria-rowcount={shown.length + 1}>
        <div role="rowgroup">
          <div
            role="row"
            className="grid gap-4 border-b-2 border-ink"
            style={{ gridTemplateColumns: tracks }}
          >
            {columns.map((column) => {
              const sort = sorting.find((each) => each.id === column.id);
              return (
                <div
                  key={column.id}
                  role="columnheader"
                  aria-sort={sort ? (sort.desc ? 'descending' : 'ascending') : 'none'}
                  className={column.align === 'right' ? 'text-right' : ''}
                >
                  <button
                    type="button"
                    onClick={() => turn(column.id)}
                    className="min-h-9 text-small font-semibold text-soft"
                  >
                    {column.head}
                    <span aria-hidden="true"> {sort ? (sort.desc ? '↓' : '↑') : ''}</span>
                  </button>
                </div>
              );
            })}
          </div>
        </div>
        {shown.length === 0 ? (
          <EmptyState title="No row fits">Take away some words.</EmptyState>
        ) : (
          <Rows shown={shown} columns={columns} tracks={tracks} onOpen={onOpen} />
        )}
        {total ? (
          <div role="rowgroup">
            <div
              role="row"
              className="grid gap-4 border-t-2 border-ink py-2 text-lead font-extrabold"
              style={{ gridTemplateColumns: tracks }}
            >
              {columns.map((column, index) => (
                <div
                  key={column.id}
                  role="cell"
                  className={column.align === 'right' ? 'tabular text-right' : ''}
                >
                  {total[index]}
                </div>
              ))}
            </div>
          </div>
        ) : null}
      </div>
    </div>
  );
}

function Rows<Row>({
  shown,
  columns,
  tracks,
  onOpen,
}: {
  readonly shown: readonly { id: string; original: Row }[];
  readonly columns: readonly LedgerColumn<Row>[];
  readonly tracks: string;
  readonly onOpen: ((row: Row) => void) | undefined;
}) {
  const view = useRef<HTMLDivElement>(null);
  const virtual = useVirtualizer({
    count: shown.length,
    getScrollElement: () => view.current,
    estimateSize: () => ROW_PX,
    overscan: 12,
  });
  const [current, setCurrent] = useState(0);
  const go = (index: number): void => {
    const next = Math.max(0, Math.min(shown.length - 1, index));
    setCurrent(next);
    virtual.scrollToIndex(next);
    requestAnimationFrame(() => view.current?.querySelector<HTMLElement>(`[data-index="${next}"]`)?.focus());
  };
  const onKey = (event: KeyboardEvent): void => {
    const steps: Readonly<Record<string, number>> = {
      ArrowDown: current + 1,
      ArrowUp: current - 1,
      Home: 0,
      End: shown.length - 1,
      PageDown: current + 12,
      PageUp: current - 12,
    };
    const target = steps[event.key];
    if (target !== undefined) {
      event.preventDefault();
      go(target);
    } else if (
      event.key === 'Enter' &&
      event.target === event.currentTarget.querySelector(`[data-index="${current}"]`)
    ) {
      const row = shown[current];
      if (row) onOpen?.(row.original);
    }
  };
  return (
    <div ref={view} role="rowgroup" onKeyDown={onKey} className="max-h-[32rem] overflow-y-auto" tabIndex={-1}>
      <div style={{ height: virtual.getTotalSize(), position: 'relative' }} role="presentation">
        {virtual.getVirtualItems().map((item) => {
          const row = shown[item.index];
          if (!row) return null;
          return (
            <div
              key={row.id}
              role="row"
              data-index={item.index}
              aria-rowindex={item.index + 2}
              tabIndex={item.index === current ? 0 : -1}
              onFocus={() => setCurrent(item.index)}
              onDoubleClick={() => onOpen?.(row.original)}
              className="absolute inset-x-0 grid h-10 items-center gap-4 border-b border-rule"
              style={{ gridTemplateColumns: tracks, transform: `translateY(${item.start}px)` }}
            >
              {columns.map((column) => (
                <div
                  key={column.id}
                  role="cell"
                  className={`truncate ${column.align === 'right' ? 'tabular text-right' : ''}`}
                >
                  {column.cell ? column.cell(row.original) : column.value(row.original)}
                </div>
              ))}
            </div>
          );
        })}
      </div>
    </div>
  );
}

function matches<Row>(columns: readonly LedgerColumn<Row>[], row: Row, needle: string): boolean {
  const wanted = needle.trim().toLowerCase();
  return columns.some((column) =>
    (column.csv?.(row) ?? String(column.value(row))).toLowerCase().includes(wanted),
  );
}

function save(filename: string, text: string): void {
  const url = URL.createObjectURL(new Blob([text], { type: 'text/csv;charset=utf-8' }));
  const link = document.createElement('a');
  link.href = url;
  link.download = filename;
  link.click();
  URL.revokeObjectURL(url);
}
