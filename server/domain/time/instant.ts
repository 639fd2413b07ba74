import { Temporal } from 'temporal-polyfill';
import type { ClinicDate } from './clinic-date.ts';

/** A moment in UTC to the millisecond, 'YYYY-MM-DDTHH:MM:SS.mmmZ'. Compares as text. */
export type Instant = string & { readonly __instant: true };

/** Reads a moment from any RFC 3339 text. Throws RangeError otherwise. */
export function instant(text: string): Instant {
  return instantOfMs(Temporal.Instant.from(text).epochMilliseconds);
}

/** The moment at a number of milliseconds since 1970-01-01T00:00Z. */
export function instantOfMs(ms: number): Instant {
  return new Date(ms).toISOString() as Instant;
}

/** Milliseconds since 1970-01-01T00:00Z. */
export function msOf(at: Instant): number {
  return Date.parse(at);
}

/** ms milliseconds later. */
export function addMs(at: Instant, ms: number): Instant {
  return instantOfMs(msOf(at) + ms);
}

/** The moment a wall clock in a zone shows `time` ('HH:MM') on a day; in a gap, the moment after it. */
export function instantAt(day: ClinicDate, time: string, zone: string): Instant {
  const zoned = Temporal.PlainDate.from(day).toZonedDateTime({ timeZone: zone, plainTime: time });
  return instantOfMs(zoned.epochMilliseconds);
}
