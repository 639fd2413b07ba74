import { Temporal } from 'temporal-polyfill';
import type { ClinicDate } from './clinic-date.ts';
import type { Instant } from './instant.ts';

const WEEKDAYS = ['Mon', 'Tue', 'Wed', 'Thu', 'Fri', 'Sat', 'Sun'];
const MONTHS = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
];

/** "12 March 2026". */
export function formatDay(day: ClinicDate): string {
  const date = Temporal.PlainDate.from(day);
  return `${date.day} ${MONTHS[date.month - 1]} ${date.year}`;
}

/** "Thu 12 March 2026". */
export function formatDayWithWeekday(day: ClinicDate): string {
  return `${WEEKDAYS[Temporal.PlainDate.from(day).dayOfWeek - 1]} ${formatDay(day)}`;
}

/** "Thu 12 March", where the year is plain from the page. */
export function formatDayShort(day: ClinicDate): string {
  const date = Temporal.PlainDate.from(day);
  return `${WEEKDAYS[date.dayOfWeek - 1]} ${date.day} ${MONTHS[date.month - 1]}`;
}

/** "March 2026". */
export function formatMonth(day: ClinicDate): string {
  const date = Temporal.PlainDate.from(day);
  return `${MONTHS[date.month - 1]} ${date.year}`;
}

/** "10:42" on the wall clock of a zone. */
export function formatTime(at: Instant, zone: string): string {
  return Temporal.Instant.from(at)
    .toZonedDateTimeISO(zone)
    .toPlainTime()
    .toString({ smallestUnit: 'minute' });
}
