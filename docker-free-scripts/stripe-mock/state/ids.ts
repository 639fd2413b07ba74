import { randomBytes } from 'node:crypto';

const ALPHABET = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz';

/** A fresh id in the published manner: a prefix that tells the kind, then 24 letters and digits. */
export function newId(prefix: string): string {
  const letters = Array.from(randomBytes(24), (byte) => ALPHABET[byte % ALPHABET.length]);
  return `${prefix}_${letters.join('')}`;
}
