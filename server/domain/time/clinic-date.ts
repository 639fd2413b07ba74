import { Temporal } from 'temporal-polyfill';
import { dayNumber, dayText, monthsLater } from './civil.ts';
import type { Instant } from './instant.ts';

/** A calendar day at a site, 'YYYY-MM-DD'. Compares as text. */
export type ClinicDate = string & { readonly __clinicDate: true };

/** Reads a day. Throws RangeError when it is no real day of the calendar. */
export function clinicDate(text: string): ClinicDate {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) throw new RangeError(`Not a day: ${text}`);
  Temporal.PlainDate.from(text, { overflow: 'reject' });
  return text as ClinicDate;
}

/** True for a real day of the calendar written 'YYYY-MM-DD'. */
export function isClinicDate(text: string): text is ClinicDate {
  try {
    clinicDate(text);
    return true;
  } catch {
    return false;
  }
}

/** The day an instant falls on in a zone (IANA name). */
export function dayOf(at: Instant, zone: string): ClinicDate {
  return clinicDate(Temporal.Instant.from(at).toZonedDateTimeISO(zone).toPlainDate().toString());
}

/** n days later (earlier when negative). */
export function addDays(day: ClinicDate, n: number): ClinicDate {
  return dayText(dayNumber(day) + n) as ClinicDate;
}

/** n months later; a day the month does not have becomes its last (31 Jan + 1 month = 28 or 29 Feb). */
export function addMonths(day: ClinicDate, n: number): ClinicDate {
  return monthsLater(day, n) as ClinicDate;
}

/** Whole days from one day to another; negative when `to` lies before `from`. */
export function daysBetween(from: ClinicDate, to: ClinicDate): number {
  return dayNumber(to) - dayNumber(from);
}

/** ISO weekday, 1 Monday to 7 Sunday. */
export function weekday(day: ClinicDate): number {
  return Temporal.PlainDate.from(day).dayOfWeek;
}

/** First day of the month a day lies in. */
export function firstOfMonth(day: ClinicDate): ClinicDate {
  return `${day.slice(0, 8)}01` as ClinicDate;
}

/** Last day of the month a day lies in. */
export function lastOfMonth(day: ClinicDate): ClinicDate {
  return addDays(addMonths(firstOfMonth(day), 1), -1);
}

/** The calendar year, the year of number series. */
export function yearOf(day: ClinicDate): number {
  return Temporal.PlainDate.from(day).year;
}
