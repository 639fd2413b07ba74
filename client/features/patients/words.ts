import type { PatientView } from '#contract/patients';
import type { Derivation } from '#domain/derivation';
import { formatAmount, type Minor, minor, negate, subtract } from '#domain/money/index';
import { optionLetter } from '#domain/quotes/index';
import { type ClinicDate, formatDay } from '#domain/time/index';

type QuoteState = PatientView['quotes'][number]['state'];

/** A quote's state with its tone: what a person may do next is said where the quote stands. */
export const QUOTE_WORDS: Readonly<
  Record<QuoteState, { readonly words: string; readonly tone: 'settled' | 'waiting' | 'wrong' | 'plain' }>
> = {
  draft: { words: 'draft', tone: 'plain' },
  issued: { words: 'issued', tone: 'waiting' },
  accepted: { words: 'accepted', tone: 'settled' },
  lapsed: { words: 'lapsed', tone: 'plain' },
  withdrawn: { words: 'withdrawn', tone: 'plain' },
};

/** "29 years": whole years on a day. */
export function ageWords(bornOn: ClinicDate, today: ClinicDate): string {
  const years = Number.parseInt(today.slice(0, 4), 10) - Number.parseInt(bornOn.slice(0, 4), 10);
  const age = today.slice(5) < bornOn.slice(5) ? years - 1 : years;
  return age === 1 ? '1 year' : `${age} years`;
}

type Course = PatientView['courses'][number];

/** Why a course costs, has had or still wants a sum: its page says it in full. */
export function courseWhy(course: Course, what: 'total' | 'left'): Derivation {
  const total = {
    label: `Price as accepted on ${formatDay(course.acceptedOn)}`,
    amountMinor: course.totalMinor,
  };
  const leftMinor = subtract(course.totalMinor, course.paidMinor);
  if (what === 'total') {
    return {
      title: `${formatAmount(course.totalMinor, course.currency)} for ${course.number}`,
      steps: [total],
    };
  }
  return {
    title: `${formatAmount(leftMinor, course.currency)} left of ${course.number}`,
    steps: [
      total,
      { label: 'Receipts that stand', amountMinor: negate(course.paidMinor) },
      { label: 'Left to pay', amountMinor: leftMinor },
    ],
  };
}

/** What the options of a quote come to. */
export function quoteWhy(quote: PatientView['quotes'][number], index: number): Derivation {
  const total = quote.totalsMinor[index] ?? minor(0);
  return {
    title: `Option ${optionLetter(index)} of ${quote.number}`,
    steps: quote.totalsMinor.map((amountMinor: Minor, at) => ({
      label: `Option ${optionLetter(at)}, as issued`,
      amountMinor,
    })),
    note: `The quote shows every line of ${quote.currency ? formatAmount(total, quote.currency) : 'it'}.`,
  };
}
