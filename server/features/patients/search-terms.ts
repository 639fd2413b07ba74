import { type ClinicDate, isClinicDate } from '#domain/time/index';

/** What somebody typed into the search field, taken apart. */
export interface SearchTerms {
  readonly bornOn: ClinicDate | null;
  readonly email: string | null;
  /** Beginnings of names. */
  readonly words: readonly string[];
}

const MONTHS = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];
const ISO = /\b(\d{4})-(\d{2})-(\d{2})\b/;
const NUMBERS = /\b(\d{1,2})[./](\d{1,2})[./](\d{4})\b/;
const WORDS = /\b(\d{1,2})\s+([a-z]{3,9})\.?\s+(\d{4})\b/i;

/**
 * Names, a date of birth and an e-mail address in any order: "quill 14 June 1996", "1996-06-14", "mara@".
 * Numbers are read day before month, as the clinic writes them.
 */
export function searchTerms(text: string): SearchTerms {
  const found = bornOnIn(text);
  const rest = found ? text.replace(found.match, ' ') : text;
  const parts = rest.split(/[\s,]+/).filter((part) => part !== '');
  return {
    bornOn: found?.day ?? null,
    email: parts.find((part) => part.includes('@'))?.toLowerCase() ?? null,
    words: parts.filter((part) => !part.includes('@')).slice(0, 6),
  };
}

function bornOnIn(text: string): { match: string; day: ClinicDate } | undefined {
  const iso = ISO.exec(text);
  if (iso) return dayIn(iso[0], iso[1], iso[2], iso[3]);
  const numbers = NUMBERS.exec(text);
  if (numbers) return dayIn(numbers[0], numbers[3], numbers[2], numbers[1]);
  const words = WORDS.exec(text);
  const month = MONTHS.indexOf((words?.[2] ?? '').slice(0, 3).toLowerCase()) + 1;
  return words && month > 0 ? dayIn(words[0], words[3], String(month), words[1]) : undefined;
}

function dayIn(
  match: string,
  year = '',
  month = '',
  day = '',
): { match: string; day: ClinicDate } | undefined {
  const text = `${year}-${month.padStart(2, '0')}-${day.padStart(2, '0')}`;
  return isClinicDate(text) ? { match, day: text } : undefined;
}
