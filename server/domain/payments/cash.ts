import type { Derivation } from '#domain/derivation';
import { add, type CurrencyCode, type Minor, sum } from '#domain/money/index';

/**
 * Smallest sum that can be paid in coins where it is more than one minor unit, in minor units. From memory, as the
 * mints withdrew the small coins; a clinic's setting goes before. In euro countries it depends on the country.
 */
const CASH_STEPS: Readonly<Record<string, number>> = {
  AUD: 5,
  CAD: 5,
  CHF: 5,
  CZK: 100,
  DKK: 50,
  HUF: 500,
  NOK: 100,
  NZD: 10,
  SEK: 100,
};

/** The smallest cash step of a currency; 1 rounds nothing. */
export function cashStepOf(currency: CurrencyCode): number {
  return CASH_STEPS[currency] ?? 1;
}

/** How much cash one person may pay over a time. `warnMinor` ≤ `refuseMinor`. */
export interface CashLimit {
  readonly warnMinor: Minor;
  readonly refuseMinor: Minor;
}

export type CashLimitAnswer =
  | { readonly answer: 'within' }
  | { readonly answer: 'warned' | 'refused'; readonly words: string; readonly why: Derivation };

/**
 * Whether a person may pay this much more in cash, counting every receipt of theirs in the time the limit looks at, so
 * that a sum cannot be split. Reaching a limit is allowed, passing it is not.
 *
 * @param before cash kept (after change) from the person's receipts that stand
 */
export function checkCashLimit(limit: CashLimit, before: readonly Minor[], nowMinor: Minor): CashLimitAnswer {
  const earlier = sum(before);
  const together = add(earlier, nowMinor);
  if (together <= limit.warnMinor) return { answer: 'within' };
  const refused = together > limit.refuseMinor;
  const why: Derivation = {
    title: 'Cash from one person',
    steps: [
      {
        label: before.length === 1 ? '1 receipt before' : `${before.length} receipts before`,
        amountMinor: earlier,
      },
      { label: 'This one', amountMinor: nowMinor },
      { label: 'Together', amountMinor: together },
      { label: refused ? 'Limit' : 'Warns from', amountMinor: refused ? limit.refuseMinor : limit.warnMinor },
    ],
  };
  const words = refused
    ? 'More cash than the clinic may take from one person. Take the rest by another tender.'
    : 'A large sum in cash from one person. Ask for the reason and note it.';
  return { answer: refused ? 'refused' : 'warned', words, why };
}
