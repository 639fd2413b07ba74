import type { Laterality } from '#domain/eye';
import type { QuoteLine } from '#domain/pricing/index';

/** One row of the priced table: what stands in the columns OD, OS and both. */
export interface TableRow {
  readonly row: string;
  readonly label: string;
  /** What is particular to the row, the details of its lines without repetition. */
  readonly detail: string | null;
  readonly cells: Readonly<Partial<Record<Laterality, QuoteLine>>>;
}

/** Lines of the same row, in the order the engine gives them, laid into columns. */
export function tableRows(lines: readonly QuoteLine[]): TableRow[] {
  const rows = new Map<string, { label: string; details: string[]; cells: TableRow['cells'] }>();
  for (const line of lines) {
    const row = rows.get(line.row) ?? { label: line.label, details: [], cells: {} };
    if (line.detail !== null && !row.details.includes(line.detail)) row.details.push(line.detail);
    row.cells = { ...row.cells, [line.laterality]: line };
    rows.set(line.row, row);
  }
  return [...rows].map(([row, { label, details, cells }]) => ({
    row,
    label,
    detail: details.length === 0 ? null : details.join(', '),
    cells,
  }));
}
