import { dinero, toDecimal } from 'dinero.js';
import { type CurrencyCode, decimalsOf } from './currency.ts';
import type { Minor } from './minor.ts';

const MINUS = '\u2212';

/**
 * An amount as it stands in a column: grouped thousands, always the minor unit, the true minus sign,
 * no currency ("−1,960.00"). The currency belongs to the column head.
 */
export function formatAmount(amount: Minor, currency: CurrencyCode): string {
  const decimal = plainAmount(amount, currency);
  const negative = decimal.startsWith('-');
  const [whole = '0', fraction] = (negative ? decimal.slice(1) : decimal).split('.');
  const grouped = whole.replace(/\B(?=(\d{3})+$)/g, ',');
  return (negative ? MINUS : '') + (fraction === undefined ? grouped : `${grouped}.${fraction}`);
}

const SYMBOLS: Readonly<Record<string, string>> = {
  EUR: '€',
  GBP: '£',
  USD: '$',
  JPY: '¥',
  INR: '₹',
  KRW: '₩',
};

/** The sign of a currency where it is unmistakable, else its code. */
export function currencySign(currency: CurrencyCode): string {
  return SYMBOLS[currency] ?? currency;
}

/** An amount standing alone in a sentence: "€4,560.00", "−€12.00", "KWD 1.250". */
export function formatMoney(amount: Minor, currency: CurrencyCode): string {
  const text = formatAmount(amount, currency);
  const sign = currencySign(currency);
  const lead = sign.length > 1 ? `${sign}\u00a0` : sign;
  return text.startsWith(MINUS) ? MINUS + lead + text.slice(1) : lead + text;
}

/** A plain decimal for files ("-1960.00"): ASCII minus, point, no grouping. */
export function plainAmount(amount: Minor, currency: CurrencyCode): string {
  const exponent = decimalsOf(currency);
  return toDecimal(dinero({ amount, currency: { code: currency, base: 10, exponent } }));
}
