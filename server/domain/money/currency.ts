/**
 * ISO 4217 minor units: how many decimals an amount of a currency is written with.
 * Two decimals is the rule; only the exceptions are listed. Source: ISO 4217, list one.
 * (The payment processor keeps a table of its own, see gateways/stripe; never mix the two.)
 */
const DECIMALS: Readonly<Record<string, number>> = {
  BIF: 0,
  CLP: 0,
  DJF: 0,
  GNF: 0,
  ISK: 0,
  JPY: 0,
  KMF: 0,
  KRW: 0,
  PYG: 0,
  RWF: 0,
  UGX: 0,
  UYI: 0,
  VND: 0,
  VUV: 0,
  XAF: 0,
  XOF: 0,
  XPF: 0,
  BHD: 3,
  IQD: 3,
  JOD: 3,
  KWD: 3,
  LYD: 3,
  OMR: 3,
  TND: 3,
  CLF: 4,
  UYW: 4,
};

/** An ISO 4217 alphabetic code, three capitals. */
export type CurrencyCode = string & { readonly __currency: true };

/** Reads a currency code. Throws RangeError when it is not three capital letters. */
export function currencyCode(text: string): CurrencyCode {
  if (!/^[A-Z]{3}$/.test(text)) throw new RangeError(`Not a currency code: ${text}`);
  return text as CurrencyCode;
}

/** Number of decimals of a currency (0, 2, 3 or 4). */
export function decimalsOf(currency: CurrencyCode): number {
  return DECIMALS[currency] ?? 2;
}
