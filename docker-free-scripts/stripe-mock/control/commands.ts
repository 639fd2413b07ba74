import { z } from 'zod';

/** What the control port takes, shared with its client. Times are ISO 8601, amounts minor units. */

export const setClockCommand = z.strictObject({
  now: z.iso.datetime({ offset: true }),
  /** Stand still there instead of running on. */
  frozen: z.boolean().default(false),
});

export const advanceClockCommand = z.strictObject({ ms: z.int().nonnegative() });

export const webhookCommand = z.strictObject({
  url: z.url().nullable(),
  secret: z.string().min(1).optional(),
  signatureTime: z.enum(['clock', 'machine']).optional(),
});

export const settingsCommand = z.strictObject({
  redirect: z.enum(['before_webhook', 'after_webhook']).optional(),
  shortBalance: z.boolean().optional(),
  feeDelayMs: z.int().nonnegative().optional(),
  negativePayouts: z.boolean().optional(),
});

export const payoutCommand = z.strictObject({
  /** Also pay out what would become available only later. */
  releasePending: z.boolean().default(false),
});

export const disputeCommand = z.strictObject({
  amount: z.int().positive().optional(),
  reason: z.string().min(1).default('fraudulent'),
  inquiry: z.boolean().default(false),
});

export const respondCommand = z.strictObject({
  text: z.string().min(1).default('Evidence of the treatment given'),
});
export const closeCommand = z.strictObject({ won: z.boolean() });

export const requestFaultCommand = z.strictObject({
  kind: z.enum([
    'error_500_before',
    'error_500_stored',
    'rate_limit_429',
    'conflict_409',
    'delay',
    'commit_then_hang',
    'commit_then_reset',
    'commit_then_truncate',
  ]),
  method: z.enum(['GET', 'POST']).default('POST'),
  /** `*` stands for one segment, as in `/v1/refunds/*`. */
  path: z.string().startsWith('/v1/'),
  nth: z.int().positive().default(1),
  times: z.int().positive().default(1),
  delayMs: z.int().nonnegative().default(0),
});

export const eventFaultCommand = z.strictObject({
  kind: z.enum([
    'drop',
    'duplicate_same_id',
    'duplicate_new_id',
    'delay',
    'hold',
    'reorder',
    'stale_timestamp',
    'wrong_secret',
  ]),
  eventType: z.string().min(1),
  times: z.int().positive().default(1),
  delayMs: z.int().nonnegative().default(0),
});

export const releaseCommand = z.strictObject({ eventType: z.string().min(1).default('*') });

export const payCommand = z.strictObject({
  cardNumber: z.string().min(1),
  email: z.string().default('payer@example.test'),
  name: z.string().default('Test Payer'),
  /** What the payer answers where the card asks; null walks away from the question. */
  authentication: z.enum(['approve', 'refuse']).nullable().default('approve'),
});

export type SetClock = z.input<typeof setClockCommand>;
export type WebhookTarget = z.input<typeof webhookCommand>;
export type Settings = z.input<typeof settingsCommand>;
export type PayoutOptions = z.input<typeof payoutCommand>;
export type DisputeOptions = z.input<typeof disputeCommand>;
export type RequestFault = z.input<typeof requestFaultCommand>;
export type EventFault = z.input<typeof eventFaultCommand>;
export type PayOptions = Omit<z.input<typeof payCommand>, 'cardNumber'>;
