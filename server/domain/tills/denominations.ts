import { type CurrencyCode, decimalsOf, type Minor, minor, sum, times } from '#domain/money/index';

/** A coin or note, in minor units. */
export interface Denomination {
  readonly valueMinor: Minor;
  readonly kind: 'note' | 'coin';
}

/** Notes and coins in use, as their banks publish them; from memory. A clinic's setting goes before. */
const SETS: Readonly<
  Record<string, { readonly notes: readonly number[]; readonly coins: readonly number[] }>
> = {
  EUR: { notes: [50_000, 20_000, 10_000, 5_000, 2_000, 1_000, 500], coins: [200, 100, 50, 20, 10, 5, 2, 1] },
  GBP: { notes: [5_000, 2_000, 1_000, 500], coins: [200, 100, 50, 20, 10, 5, 2, 1] },
  USD: { notes: [10_000, 5_000, 2_000, 1_000, 500, 200, 100], coins: [100, 50, 25, 10, 5, 1] },
  CHF: { notes: [100_000, 20_000, 10_000, 5_000, 2_000, 1_000], coins: [500, 200, 100, 50, 20, 10, 5] },
  INR: { notes: [50_000, 20_000, 10_000, 5_000, 2_000, 1_000], coins: [2_000, 1_000, 500, 200, 100] },
  AUD: { notes: [10_000, 5_000, 2_000, 1_000, 500], coins: [200, 100, 50, 20, 10, 5] },
  CAD: { notes: [10_000, 5_000, 2_000, 1_000, 500], coins: [200, 100, 25, 10, 5] },
  SEK: { notes: [100_000, 50_000, 20_000, 10_000, 5_000, 2_000], coins: [1_000, 500, 200, 100] },
  NOK: { notes: [100_000, 50_000, 20_000, 10_000, 5_000], coins: [2_000, 1_000, 500, 100] },
  DKK: { notes: [50_000, 20_000, 10_000, 5_000], coins: [2_000, 1_000, 500, 200, 100, 50] },
  JPY: { notes: [10_000, 5_000, 2_000, 1_000], coins: [500, 100, 50, 10, 5, 1] },
  KWD: { notes: [20_000, 10_000, 5_000, 1_000, 500, 250], coins: [100, 50, 20, 10, 5] },
};

/**
 * The notes and coins to count, largest first. A currency without a list of its own is counted by ones, twos and fives of
 * every size: every sum can be entered.
 */
export function denominationsOf(currency: CurrencyCode): readonly Denomination[] {
  const set = SETS[currency];
  if (set) {
    return [
      ...set.notes.map((value) => ({ valueMinor: minor(value), kind: 'note' as const })),
      ...set.coins.map((value) => ({ valueMinor: minor(value), kind: 'coin' as const })),
    ];
  }
  const one = 10 ** decimalsOf(currency);
  const largest = Math.max(one * 100, 100_000);
  const sizes: number[] = [];
  for (let size = largest; size >= 1; size /= 10) sizes.push(size);
  return sizes
    .flatMap((size) => [size * 5, size * 2, size])
    .map((value) => ({ valueMinor: minor(value), kind: value >= one * 5 ? 'note' : 'coin' }));
}

/** How many of each denomination, keyed by its value in minor units. */
export type CashCount = Readonly<Record<string, number>>;

export type Counted =
  | { readonly ok: true; readonly amountMinor: Minor }
  | {
      readonly ok: false;
      readonly refusals: readonly { readonly field: string; readonly words: string }[];
    };

/** Adds up a count. Refuses what is no denomination and what is no number of pieces, naming the field. */
export function countCash(denominations: readonly Denomination[], count: CashCount): Counted {
  const known = new Set(denominations.map(({ valueMinor }) => String(valueMinor)));
  const refusals = Object.entries(count).flatMap(([value, pieces]) => {
    const field = `count.${value}`;
    if (!known.has(value)) return [{ field, words: 'There is no such note or coin.' }];
    if (!Number.isSafeInteger(pieces) || pieces < 0 || pieces > 100_000)
      return [{ field, words: 'A number of pieces, from nothing to 100,000.' }];
    return [];
  });
  if (refusals.length > 0) return { ok: false, refusals };
  const amounts = denominations.map(({ valueMinor }) => times(valueMinor, count[String(valueMinor)] ?? 0));
  return { ok: true, amountMinor: sum(amounts) };
}
