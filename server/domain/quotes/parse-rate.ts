/**
 * Reads a rate as people type it: "4", "4 %", "2.5", "2,25%". Basis points, or null when it does not read as one with at
 * most two decimals from 0 to 100.
 */
export function parseRate(text: string): number | null {
  const match = /^(\d{1,3})(?:[.,](\d{1,2}))?\s*%?$/.exec(text.trim());
  if (!match) return null;
  const [, whole = '0', fraction = ''] = match;
  const rateBp = Number.parseInt(whole, 10) * 100 + Number.parseInt(fraction.padEnd(2, '0'), 10);
  return rateBp <= 10_000 ? rateBp : null;
}
