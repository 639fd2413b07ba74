import { z } from 'zod';
import type { Eye, Laterality } from '#domain/eye';
import { type CurrencyCode, type Minor, minor } from '#domain/money/index';
import { type ClinicDate, type Instant, isClinicDate } from '#domain/time/index';

/** A key in the database, in JSON a whole number, in a path its digits. */
export const idField = z.coerce.number().int().min(1).max(Number.MAX_SAFE_INTEGER);

/** Money in minor units, either sign. */
export const minorField = z
  .int('needs a whole number of minor units')
  .min(-9_000_000_000_000)
  .max(9_000_000_000_000)
  .transform((value): Minor => minor(value));

/** Money above zero. */
export const positiveMinorField = z
  .int('needs a whole number of minor units')
  .min(1, 'must be more than nothing')
  .max(9_000_000_000_000)
  .transform((value): Minor => minor(value));

/** Money, zero or above. */
export const amountField = z
  .int('needs a whole number of minor units')
  .min(0, 'cannot be below zero')
  .max(9_000_000_000_000)
  .transform((value): Minor => minor(value));

export const currencyField = z
  .string()
  .regex(/^[A-Z]{3}$/, 'needs a currency code of three capitals')
  .transform((value) => value as CurrencyCode);

/** A day, 'YYYY-MM-DD'. */
export const dayField = z
  .string()
  .refine(isClinicDate, 'needs a day of the calendar, YYYY-MM-DD')
  .transform((value) => value as ClinicDate);

/** A moment in UTC. */
export const instantField = z.iso.datetime({ offset: true }).transform((value) => value as Instant);

export const eyeField = z.enum(['OD', 'OS']) satisfies z.ZodType<Eye>;
export const lateralityField = z.enum(['OD', 'OS', 'OU']) satisfies z.ZodType<Laterality>;

/** A line of text people type: trimmed, no control characters. */
export function lineField(max = 200) {
  return (
    z
      .string()
      .trim()
      .min(1, 'cannot be empty')
      .max(max)
      // biome-ignore lint/suspicious/noControlCharactersInRegex: control characters are what is refused
      .regex(/^[^\u0000-\u001f\u007f]*$/, 'cannot hold control characters')
  );
}

/** A reason people give, several lines. */
export const reasonField = z.string().trim().min(3, 'please give a reason').max(1_000);

export const emailField = z
  .email('needs an e-mail address')
  .max(254)
  .transform((value) => value.toLowerCase());

/** An identifier the browser makes once per intent, so that a second click repeats instead of doubling (a UUID). */
export const attemptField = z.uuid();

/** One figure's reasons, one line per step: what the margin shows. */
export const derivationSchema = z
  .object({
    title: z.string(),
    steps: z
      .array(
        z.object({
          label: z.string(),
          amountMinor: z.int().optional(),
          text: z.string().optional(),
          rule: z.string().optional(),
          version: z.string().optional(),
        }),
      )
      .readonly(),
    note: z.string().optional(),
  })
  .meta({ id: 'Derivation' });
