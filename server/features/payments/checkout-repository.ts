import type { CurrencyCode, Minor } from '#domain/money/index';
import type { Instant } from '#domain/time/index';
import type { Checkout, CheckoutRequest } from '#server/gateways/index';
import { type Db, rawRows, readMinor, sqlInstant, type Trx } from '#server/platform/db';

export type AttemptState = 'made' | 'open' | 'paid' | 'expired' | 'failed' | 'quarantined';
export type CheckoutPurpose = 'deposit' | 'balance';

/** One durable try to have a debt paid on the hosted page. Stored before anything is sent. */
export interface CheckoutAttempt {
  readonly checkoutAttemptId: number;
  readonly attemptKey: string;
  readonly courseId: number;
  readonly siteId: number;
  readonly purpose: CheckoutPurpose;
  readonly currency: CurrencyCode;
  readonly amountMinor: Minor;
  readonly state: AttemptState;
  readonly request: CheckoutRequest;
  readonly sessionId: string | null;
  readonly sessionUrl: string | null;
  readonly receiptId: number | null;
  readonly createdAt: Instant;
  readonly expiresAt: Instant;
}

interface AttemptRow {
  checkout_attempt_id: number;
  attempt_key: string;
  course_id: number;
  site_id: number;
  purpose: CheckoutPurpose;
  currency: CurrencyCode;
  amount_minor: number;
  state: AttemptState;
  request: string;
  session_id: string | null;
  session_url: string | null;
  receipt_id: number | null;
  created_at: Instant;
  expires_at: Instant;
}

function asAttempt(row: AttemptRow): CheckoutAttempt {
  return {
    checkoutAttemptId: row.checkout_attempt_id,
    attemptKey: row.attempt_key,
    courseId: row.course_id,
    siteId: row.site_id,
    purpose: row.purpose,
    currency: row.currency,
    amountMinor: readMinor(row.amount_minor),
    state: row.state,
    request: JSON.parse(row.request) as CheckoutRequest,
    sessionId: row.session_id,
    sessionUrl: row.session_url,
    receiptId: row.receipt_id,
    createdAt: row.created_at,
    expiresAt: row.expires_at,
  };
}

async function firstAttempt(
  trx: Db | Trx,
  where: string,
  bindings: readonly unknown[],
): Promise<CheckoutAttempt | undefined> {
  const [row] = await rawRows<AttemptRow>(trx, `SELECT * FROM checkout_attempts WHERE ${where}`, bindings);
  return row ? asAttempt(row) : undefined;
}

/** The attempt with a browser's key. */
export async function attemptByKey(trx: Db | Trx, key: string): Promise<CheckoutAttempt | undefined> {
  return await firstAttempt(trx, 'attempt_key = ?', [key]);
}

/** The attempt with a browser's key, locked until the end of the transaction. */
export async function lockAttempt(trx: Trx, key: string): Promise<CheckoutAttempt | undefined> {
  return await firstAttempt(trx, 'attempt_key = ? FOR UPDATE', [key]);
}

/** The one attempt of a course that could still be paid (invariant 7). */
export async function liveAttempt(trx: Db | Trx, courseId: number): Promise<CheckoutAttempt | undefined> {
  return await firstAttempt(trx, 'live_course_id = ?', [courseId]);
}

/** The newest attempt of a course, whatever became of it. */
export async function latestAttempt(trx: Db | Trx, courseId: number): Promise<CheckoutAttempt | undefined> {
  return await firstAttempt(trx, 'course_id = ? ORDER BY checkout_attempt_id DESC LIMIT 1', [courseId]);
}

/** The attempt behind one of the processor's sessions, by its id or, when our row never heard it, by the key it carries. */
export async function attemptOfCheckout(
  trx: Db | Trx,
  checkout: Pick<Checkout, 'sessionId' | 'attemptKey'>,
): Promise<CheckoutAttempt | undefined> {
  return await firstAttempt(trx, '(session_id = ? OR attempt_key = ?) LIMIT 1', [
    checkout.sessionId,
    checkout.attemptKey ?? '',
  ]);
}

/** Live attempts nobody has looked at since a moment: what the sweep asks the processor about. */
export async function unwatchedAttempts(
  trx: Db | Trx,
  since: Instant,
  limit: number,
): Promise<CheckoutAttempt[]> {
  const rows = await rawRows<AttemptRow>(
    trx,
    `SELECT * FROM checkout_attempts WHERE state IN ('made', 'open') AND COALESCE(checked_at, changed_at) < ?
     ORDER BY COALESCE(checked_at, changed_at) LIMIT ?`,
    [sqlInstant(since), limit],
  );
  return rows.map(asAttempt);
}

/** Stores a new attempt in state 'made'. */
export async function insertAttempt(
  trx: Trx,
  attempt: Pick<CheckoutAttempt, 'courseId' | 'siteId' | 'purpose' | 'request' | 'expiresAt'>,
  now: Instant,
): Promise<void> {
  await trx('checkout_attempts').insert({
    attempt_key: attempt.request.attemptKey,
    course_id: attempt.courseId,
    site_id: attempt.siteId,
    purpose: attempt.purpose,
    currency: attempt.request.currency,
    amount_minor: attempt.request.amountMinor,
    state: 'made',
    request: JSON.stringify(attempt.request),
    created_at: sqlInstant(now),
    changed_at: sqlInstant(now),
    expires_at: sqlInstant(attempt.expiresAt),
  });
}

/** What changes on an attempt as it lives. */
export interface AttemptChange {
  readonly state?: AttemptState;
  readonly checkout?: Checkout;
  readonly receiptId?: number;
  readonly lastError?: string;
}

/** Writes a change of an attempt; what the processor told about the session is kept with it. */
export async function changeAttempt(
  trx: Trx,
  key: string,
  change: AttemptChange,
  now: Instant,
): Promise<void> {
  await trx('checkout_attempts')
    .where({ attempt_key: key })
    .update({
      changed_at: sqlInstant(now),
      ...(change.state ? { state: change.state } : {}),
      ...(change.receiptId ? { receipt_id: change.receiptId } : {}),
      ...(change.lastError ? { last_error: change.lastError.slice(0, 200) } : {}),
      ...(change.checkout
        ? {
            session_id: change.checkout.sessionId,
            session_url: change.checkout.url,
            payment_intent_id: change.checkout.paymentIntentId,
            charge_id: change.checkout.chargeId,
          }
        : {}),
    });
}

/** Notes that the processor was asked about an attempt. */
export async function markChecked(trx: Trx, key: string, now: Instant): Promise<void> {
  await trx('checkout_attempts')
    .where({ attempt_key: key })
    .update({ checked_at: sqlInstant(now) });
}
