/**
 * The service's own table of minor units and least charges. It is not ISO 4217: MGA has no minor unit here, ISK
 * and UGX are written with two decimals that must be zero, the three-decimal currencies end in a zero.
 * Source: the service's published page on currencies.
 */

const ZERO_DECIMALS = 'bif clp djf gnf jpy kmf krw mga pyg rwf vnd vuv xaf xof xpf'.split(' ');
const TWO_DECIMALS_ENDING_00 = ['isk', 'ugx'];
const THREE_DECIMALS_ENDING_0 = ['bhd', 'jod', 'kwd', 'omr', 'tnd'];

const LEAST_CHARGE: Readonly<Record<string, number>> = {
  eur: 50,
  usd: 50,
  gbp: 30,
  sek: 300,
  nok: 300,
  dkk: 250,
  pln: 200,
  czk: 1_500,
  huf: 17_500,
  jpy: 50,
};

/** The most one charge may be: eight digits. */
export const GREATEST_CHARGE = 99_999_999;

const KNOWN = new Set(Intl.supportedValuesOf('currency').map((code) => code.toLowerCase()));

export function isKnownCurrency(code: string): boolean {
  return KNOWN.has(code);
}

export function decimalsOf(currency: string): 0 | 2 | 3 {
  if (ZERO_DECIMALS.includes(currency)) return 0;
  return THREE_DECIMALS_ENDING_0.includes(currency) ? 3 : 2;
}

/** The least charge in minor units; 1 where none is published here. */
export function leastCharge(currency: string): number {
  return LEAST_CHARGE[currency] ?? 1;
}

/** What is wrong with the last digits of an amount, or null. */
export function wrongEnding(amount: number, currency: string): string | null {
  if (TWO_DECIMALS_ENDING_00.includes(currency) && amount % 100 !== 0) return 'must end in 00';
  if (THREE_DECIMALS_ENDING_0.includes(currency) && amount % 10 !== 0) return 'must end in 0';
  return null;
}

/** An amount for people, as in `4,560.00 EUR`. */
export function readableAmount(amount: number, currency: string): string {
  const decimals = decimalsOf(currency);
  const sign = amount < 0 ? '−' : '';
  const digits = String(Math.abs(amount)).padStart(decimals + 1, '0');
  const whole = digits.slice(0, digits.length - decimals).replace(/\B(?=(\d{3})+$)/g, ',');
  const fraction = decimals === 0 ? '' : `.${digits.slice(-decimals)}`;
  return `${sign}${whole}${fraction} ${currency.toUpperCase()}`;
}
