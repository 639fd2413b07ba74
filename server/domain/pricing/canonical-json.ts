/**
 * JSON with sorted keys and nothing optional, so that equal values give equal bytes: what hashes and freezes go by.
 * Members that are undefined are left out. (The ordering idea of RFC 8785; we hold whole numbers and texts only.)
 *
 * @throws TypeError for what JSON cannot hold exactly: fractions that are not finite, functions, symbols
 */
export function canonicalJson(value: unknown): string {
  if (value === null || typeof value === 'boolean' || typeof value === 'string') return JSON.stringify(value);
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new TypeError(`JSON cannot hold ${value}`);
    return JSON.stringify(value);
  }
  if (Array.isArray(value)) return `[${value.map(canonicalJson).join(',')}]`;
  if (typeof value !== 'object') throw new TypeError(`JSON cannot hold a ${typeof value}`);
  const record = value as Readonly<Record<string, unknown>>;
  let text = '';
  for (const key of Object.keys(record).sort()) {
    if (record[key] === undefined) continue;
    text += `${text === '' ? '' : ','}${JSON.stringify(key)}:${canonicalJson(record[key])}`;
  }
  return `{${text}}`;
}
