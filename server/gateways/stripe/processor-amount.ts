import type { CurrencyCode, Minor } from '#domain/money/index';
import { decimalsOf } from '#domain/money/index';

/**
 * The processor's own minor units, which differ from ISO 4217 (source: its published currency notes, gathered in the
 * project's design). Ours are ISO; this table is never used outside the gateway.
 */
const ZERO_DECIMAL = new Set('BIF CLP DJF GNF JPY KMF KRW MGA PYG RWF VND VUV XAF XOF XPF'.split(' '));
const THREE_DECIMAL = new Set('BHD JOD KWD OMR TND'.split(' '));

/** Smallest amount the processor takes, in its own units (same source). Currencies not listed: no minimum known. */
const MINIMUM: Readonly<Record<string, number>> = {
  EUR: 50,
  USD: 50,
  GBP: 30,
  SEK: 300,
  NOK: 300,
  DKK: 250,
  PLN: 200,
  CZK: 1500,
  HUF: 17500,
  JPY: 50,
};

/** Why an amount cannot be taken online. */
export type AmountRefusal = 'below_minimum' | 'not_representable';

export type ProcessorAmount =
  | { readonly ok: true; readonly units: number }
  | { readonly ok: false; readonly why: AmountRefusal };

function processorDecimals(currency: CurrencyCode): number {
  if (ZERO_DECIMAL.has(currency)) return 0;
  return THREE_DECIMAL.has(currency) ? 3 : 2;
}

/** Our minor units as the processor writes them. Refused below its minimum or where its rounding would change the amount. */
export function toProcessorAmount(amount: Minor, currency: CurrencyCode): ProcessorAmount {
  const shift = processorDecimals(currency) - decimalsOf(currency);
  const units = shift >= 0 ? amount * 10 ** shift : amount / 10 ** -shift;
  if (!Number.isSafeInteger(units)) return { ok: false, why: 'not_representable' };
  if (THREE_DECIMAL.has(currency) && units % 10 !== 0) return { ok: false, why: 'not_representable' };
  if (units < (MINIMUM[currency] ?? 1)) return { ok: false, why: 'below_minimum' };
  return { ok: true, units };
}

/** The processor's units as our minor units. Throws RangeError where they do not come out whole. */
export function fromProcessorAmount(units: number, currency: CurrencyCode): Minor {
  const shift = decimalsOf(currency) - processorDecimals(currency);
  const amount = shift >= 0 ? units * 10 ** shift : units / 10 ** -shift;
  if (!Number.isSafeInteger(amount)) throw new RangeError(`Not whole in ${currency}: ${units}`);
  return (amount === 0 ? 0 : amount) as Minor;
}
