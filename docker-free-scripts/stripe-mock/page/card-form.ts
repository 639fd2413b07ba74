import { hasValidCheckDigit } from '#stand-ins/stripe-mock/objects/cards';
import type { CardEntry } from '#stand-ins/stripe-mock/objects/payments';

export type FieldName = 'email' | 'number' | 'expiry' | 'code' | 'name';
export type FormTexts = Readonly<Record<FieldName, string>>;
export type Complaints = Partial<Record<FieldName, string>>;

export const EMPTY_FORM: FormTexts = { email: '', number: '', expiry: '', code: '', name: '' };

export type CardForm =
  | { readonly ok: true; readonly entry: CardEntry }
  | { readonly ok: false; readonly complaints: Complaints };

export function textsOf(body: unknown): FormTexts {
  const fields = (body ?? {}) as Record<string, unknown>;
  const read = (name: FieldName) => (typeof fields[name] === 'string' ? fields[name].trim() : '');
  return {
    email: read('email'),
    number: read('number'),
    expiry: read('expiry'),
    code: read('code'),
    name: read('name'),
  };
}

/**
 * Reads what the payer typed. What is refused here never reaches the card's bank.
 *
 * @param emailGiven whether the session names the payer's address already
 * @param nowMs the service's time, which decides whether a card is over
 */
export function readCardForm(texts: FormTexts, emailGiven: boolean, nowMs: number): CardForm {
  const number = texts.number.replace(/[\s-]/g, '');
  const expiry = readExpiry(texts.expiry);
  const complaints: Complaints = {};
  if (!emailGiven && !/^[^\s@]+@[^\s@]+$/.test(texts.email)) complaints.email = 'Enter an e-mail address.';
  if (!/^\d{13,19}$/.test(number)) complaints.number = 'Enter all digits of the card number.';
  else if (!hasValidCheckDigit(number)) complaints.number = 'This card number is not valid; look for a slip.';
  if (expiry === null) complaints.expiry = 'Enter month and year, such as 04 / 31.';
  else if (Date.UTC(expiry.year, expiry.month) <= nowMs) complaints.expiry = 'This card is past its date.';
  if (!/^\d{3,4}$/.test(texts.code)) complaints.code = 'Enter the three or four digits.';
  if (texts.name === '') complaints.name = 'Enter the name on the card.';
  if (expiry === null || Object.keys(complaints).length > 0) return { ok: false, complaints };
  return {
    ok: true,
    entry: {
      number,
      expMonth: expiry.month,
      expYear: expiry.year,
      payer: { email: texts.email === '' ? null : texts.email, name: texts.name },
    },
  };
}

function readExpiry(text: string): { month: number; year: number } | null {
  const parts = /^(\d{1,2})\s*[/.-]?\s*(?:20)?(\d{2})$/.exec(text);
  const month = Number(parts?.[1]);
  return parts === null || month < 1 || month > 12 ? null : { month, year: 2000 + Number(parts[2]) };
}
