import { type CurrencyCode, decimalsOf } from './currency.ts';
import { type Minor, minor } from './minor.ts';

/** Why a typed amount was not understood. */
export type MoneyRefusal = 'empty' | 'not_an_amount' | 'too_many_decimals' | 'too_large';

export type ParsedMoney =
  | { readonly ok: true; readonly amount: Minor }
  | { readonly ok: false; readonly why: MoneyRefusal };

/**
 * Reads money as people type it: "1,250", "1250.5", "1.250,50", "€ 40", "-3.20", "−3.20".
 * The last separator followed by at most as many digits as the currency has decimals is the decimal point;
 * a separator followed by exactly three digits groups thousands (so "1,250" is one thousand two hundred and fifty).
 * With three-decimal currencies a lone separator before three digits is a decimal point only when it is ".".
 */
export function parseMoney(text: string, currency: CurrencyCode): ParsedMoney {
  const bare = text
    .replace(/[\s\u00a0\u202f'’]/g, '')
    .replace(/\u2212/g, '-')
    .replace(/^(-?)(?:[A-Z]{3}|\p{Sc})/u, '$1');
  if (bare === '') return { ok: false, why: 'empty' };
  const match = /^(-?)([\d.,]*\d[\d.,]*)$/.exec(bare);
  if (!match) return { ok: false, why: 'not_an_amount' };
  const [, sign = '', body = ''] = match;
  const decimals = decimalsOf(currency);
  const cut = decimalCut(body, decimals);
  const whole = (cut < 0 ? body : body.slice(0, cut)).replace(/[.,]/g, '');
  const fraction = cut < 0 ? '' : body.slice(cut + 1);
  if (!groupsAreSound(cut < 0 ? body : body.slice(0, cut))) return { ok: false, why: 'not_an_amount' };
  if (fraction.length > decimals) return { ok: false, why: 'too_many_decimals' };
  const units = BigInt(`${whole === '' ? '0' : whole}${fraction.padEnd(decimals, '0')}`);
  if (units > BigInt(Number.MAX_SAFE_INTEGER)) return { ok: false, why: 'too_large' };
  return { ok: true, amount: minor(Number(sign === '-' ? -units : units)) };
}

/** Position of the decimal separator in the digits, or −1 when there is none. */
function decimalCut(body: string, decimals: number): number {
  const last = Math.max(body.lastIndexOf('.'), body.lastIndexOf(','));
  if (last < 0) return -1;
  const mark = body[last];
  const other = mark === '.' ? ',' : '.';
  const after = body.length - last - 1;
  if (body.includes(other)) return last;
  const alone = body.indexOf(mark ?? '') === last;
  if (!alone) return -1;
  if (after === 3) return decimals === 3 && mark === '.' ? last : -1;
  return last;
}

/** Thousands groups, where there are any, hold three digits each. */
function groupsAreSound(whole: string): boolean {
  const groups = whole.split(/[.,]/);
  if (groups.length === 1) return true;
  const marks = new Set(whole.replace(/\d/g, ''));
  return (
    marks.size === 1 &&
    /^\d{1,3}$/.test(groups[0] ?? '') &&
    groups.slice(1).every((group) => group.length === 3)
  );
}
