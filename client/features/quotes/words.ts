import type { Tone } from '#client/ui/states.tsx';
import type { CancellationRow, PricedCourse } from '#domain/pricing/index';
import type { QuoteState } from '#domain/quotes/index';
import { type ClinicDate, formatDay } from '#domain/time/index';

export const STATE: Readonly<Record<QuoteState, { readonly words: string; readonly tone: Tone }>> = {
  draft: { words: 'draft', tone: 'plain' },
  issued: { words: 'issued', tone: 'waiting' },
  accepted: { words: 'accepted', tone: 'settled' },
  lapsed: { words: 'lapsed', tone: 'plain' },
  withdrawn: { words: 'withdrawn', tone: 'plain' },
};

export const STATES = Object.keys(STATE) as QuoteState[];

/** "To pay, tax exempt" or "To pay, tax included". */
export function toPayWords(course: PricedCourse): string {
  if (course.taxMinor > 0) return 'To pay, tax included';
  return course.taxes.some((tax) => tax.treatment === 'exempt') ? 'To pay, tax exempt' : 'To pay';
}

/** When a sum falls due: "by 2 April 2026" or "before surgery". */
export function dueDayWords(dueOn: ClinicDate | null, kind: string): string {
  if (kind === 'deposit') return 'On accepting';
  return dueOn === null ? 'Before surgery' : `by ${formatDay(dueOn)}`;
}

/** A row of the ladder as the patient reads it: "until 19 March 2026", "found unsuitable, any day". */
export function cancellationWords(row: CancellationRow): string {
  const lower = row.label.replace(/^./, (letter) => letter.toLowerCase());
  if (row.until === null) return `${lower}, ${row.detail}`;
  if (row.event === 'no_show') return `${lower}, ${formatDay(row.until)}`;
  return `until ${formatDay(row.until)}${row.label.includes(',') ? `,${row.label.split(',')[1]}` : ''}`;
}
