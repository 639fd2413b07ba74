/** Beginnings that spreadsheet programs take for a formula. */
const FORMULA = /^[=+\-@\t\r]/;
const PLAIN_NUMBER = /^-?\d+(\.\d+)?$/;

/**
 * Rows as CSV by RFC 4180: CRLF, quotes doubled. A text cell that a spreadsheet would run as a formula gets a leading
 * apostrophe; plain numbers keep their minus sign.
 */
export function csvText(rows: readonly (readonly (string | number | null)[])[]): string {
  return rows.map((row) => `${row.map(cell).join(',')}\r\n`).join('');
}

function cell(value: string | number | null): string {
  if (value === null) return '';
  const text = String(value);
  const safe = FORMULA.test(text) && !PLAIN_NUMBER.test(text) ? `'${text}` : text;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
