/**
 * What the stand-in remembers. Amounts are whole minor units of the record's own currency, `created` and other
 * instants named as in the published objects are Unix seconds; names ending in `Ms` are milliseconds.
 */

export interface Stored {
  readonly id: string;
  /** Order of creation; breaks ties between records of the same second. */
  readonly seq: number;
  readonly created: number;
}

export type Metadata = Readonly<Record<string, string>>;

export interface LineItem {
  readonly id: string;
  readonly priceId: string;
  readonly productId: string;
  readonly name: string;
  readonly unitAmount: number;
  readonly quantity: number;
}

export interface SessionRecord extends Stored {
  readonly status: 'open' | 'complete' | 'expired';
  readonly paymentStatus: 'unpaid' | 'paid';
  readonly expiresAt: number;
  readonly currency: string;
  readonly amountTotal: number;
  readonly lineItems: readonly LineItem[];
  readonly successUrl: string;
  readonly cancelUrl: string | null;
  readonly clientReferenceId: string | null;
  readonly customer: string | null;
  readonly customerEmail: string | null;
  readonly payer: Payer | null;
  readonly metadata: Metadata;
  readonly intentMetadata: Metadata;
  readonly intentDescription: string | null;
  readonly receiptEmail: string | null;
  readonly paymentIntent: string | null;
  readonly locale: string | null;
  readonly submitType: string | null;
  readonly allowedPaymentMethodTypes: readonly string[] | null;
  readonly adaptivePricing: boolean;
}

export interface Payer {
  readonly email: string | null;
  readonly name: string | null;
}

export interface CardFailure {
  readonly code: string;
  readonly declineCode: string | null;
  readonly message: string;
  readonly param: string | null;
}

export type IntentStatus = 'requires_payment_method' | 'requires_action' | 'succeeded' | 'canceled';

export interface IntentRecord extends Stored {
  readonly sessionId: string;
  readonly status: IntentStatus;
  readonly amount: number;
  readonly currency: string;
  readonly customer: string | null;
  readonly metadata: Metadata;
  readonly description: string | null;
  readonly receiptEmail: string | null;
  readonly clientSecret: string;
  readonly latestCharge: string | null;
  /** The card last tried: attached for good once paid, waiting while the payer authenticates. */
  readonly paymentMethod: string | null;
  readonly lastFailure:
    | (CardFailure & { readonly charge: string | null; readonly paymentMethod: string })
    | null;
  readonly canceledAt: number | null;
}

/** How a test card behaves, decided by its number; the number itself is never kept. */
export type CardBehaviour =
  | 'succeeds'
  | 'declined'
  | 'insufficient_funds'
  | 'expired'
  | 'wrong_code'
  | 'processing_error'
  | 'authentication'
  | 'authentication_then_decline'
  | 'disputed'
  | 'inquiry'
  | 'refund_pending'
  | 'refund_fails_later'
  | 'unknown';

export interface CardRecord extends Stored {
  readonly behaviour: CardBehaviour;
  readonly brand: string;
  readonly last4: string;
  readonly expMonth: number;
  readonly expYear: number;
  readonly payer: Payer;
  readonly customer: string | null;
}

export interface ChargeRecord extends Stored {
  readonly status: 'succeeded' | 'failed';
  readonly amount: number;
  readonly currency: string;
  readonly intentId: string;
  readonly cardId: string;
  readonly customer: string | null;
  readonly metadata: Metadata;
  readonly description: string | null;
  readonly receiptEmail: string | null;
  readonly authenticated: boolean;
  readonly failure: CardFailure | null;
  readonly balanceTransaction: string | null;
}

export type RefundStatus = 'pending' | 'requires_action' | 'succeeded' | 'failed' | 'canceled';

export interface RefundRecord extends Stored {
  readonly status: RefundStatus;
  readonly amount: number;
  readonly currency: string;
  readonly chargeId: string;
  readonly intentId: string;
  readonly reason: 'duplicate' | 'fraudulent' | 'requested_by_customer' | null;
  readonly metadata: Metadata;
  readonly pendingReason: 'insufficient_funds' | 'processing' | null;
  readonly balanceTransaction: string | null;
  readonly failureBalanceTransaction: string | null;
  readonly failureReason: string | null;
}

export type DisputeStatus =
  | 'needs_response'
  | 'under_review'
  | 'won'
  | 'lost'
  | 'warning_needs_response'
  | 'warning_under_review'
  | 'warning_closed';

export interface DisputeRecord extends Stored {
  readonly status: DisputeStatus;
  /** An inquiry asks before it takes: it moves no money. */
  readonly inquiry: boolean;
  readonly amount: number;
  readonly currency: string;
  readonly chargeId: string;
  readonly intentId: string;
  readonly reason: string;
  readonly evidence: Readonly<Record<string, string>>;
  readonly submissionCount: number;
  readonly dueBy: number;
  readonly metadata: Metadata;
  readonly balanceTransactions: readonly string[];
}

export type BalanceTransactionType =
  | 'charge'
  | 'refund'
  | 'refund_failure'
  | 'adjustment'
  | 'payout'
  | 'payout_failure'
  | 'payout_cancel';
export type ReportingCategory =
  | 'charge'
  | 'refund'
  | 'refund_failure'
  | 'dispute'
  | 'dispute_reversal'
  | 'payout'
  | 'payout_reversal';

export interface BalanceTransactionRecord extends Stored {
  readonly type: BalanceTransactionType;
  readonly reportingCategory: ReportingCategory;
  readonly amount: number;
  readonly fee: number;
  readonly feeDescription: string;
  readonly currency: string;
  readonly source: string;
  readonly description: string | null;
  readonly availableOn: number;
  /** The automatic payout that carried this row to the bank; the payout's own row names itself. */
  readonly payoutId: string | null;
}

export interface PayoutRecord extends Stored {
  readonly status: 'pending' | 'in_transit' | 'paid' | 'failed' | 'canceled';
  readonly amount: number;
  readonly currency: string;
  readonly arrivalDate: number;
  readonly reconciled: boolean;
  readonly balanceTransaction: string;
  readonly failureBalanceTransaction: string | null;
  readonly failure: { readonly code: string; readonly message: string } | null;
}

export interface CustomerRecord extends Stored {
  readonly email: string | null;
  readonly name: string | null;
  readonly description: string | null;
  readonly phone: string | null;
  readonly metadata: Metadata;
}

export type Json = null | boolean | number | string | readonly Json[] | { readonly [key: string]: Json };
export type JsonObject = { readonly [key: string]: Json };

export interface EventRecord extends Stored {
  readonly type: string;
  readonly object: JsonObject;
  readonly previousAttributes: JsonObject | null;
  readonly request: { readonly id: string; readonly idempotencyKey: string | null } | null;
}

export interface DeliveryAttempt {
  readonly atMs: number;
  readonly status: number | null;
  readonly error: string | null;
}

/** Why a delivery waits although it is due. */
export type Hold = 'until_released' | 'until_redirected' | 'until_a_later_event_went_out';

export interface DeliveryRecord extends Stored {
  readonly eventId: string;
  readonly state: 'waiting' | 'held' | 'delivered' | 'given_up';
  readonly hold: Hold | null;
  readonly twist: 'stale_timestamp' | 'wrong_secret' | null;
  readonly attempts: readonly DeliveryAttempt[];
}

export type TaskKind =
  | 'expire_session'
  | 'attach_fee'
  | 'settle_refund'
  | 'fail_refund'
  | 'open_dispute'
  | 'open_inquiry'
  | 'dispute_deadline'
  | 'daily_payout'
  | 'payout_on_its_way'
  | 'payout_arrives'
  | 'deliver';

export interface TaskRecord extends Stored {
  readonly kind: TaskKind;
  readonly dueAtMs: number;
  /** Id of the object the task is about; empty for the daily payout. */
  readonly subject: string;
}

export interface KeyRecord extends Stored {
  readonly fingerprint: string;
  readonly endpoint: string;
  readonly firstSeenMs: number;
  readonly requestId: string;
  readonly status: number;
  readonly body: string;
}

export type RequestFaultKind =
  | 'error_500_before'
  | 'error_500_stored'
  | 'rate_limit_429'
  | 'conflict_409'
  | 'delay'
  | 'commit_then_hang'
  | 'commit_then_reset'
  | 'commit_then_truncate';

export interface RequestFaultRecord extends Stored {
  readonly kind: RequestFaultKind;
  readonly method: string;
  /** A path; `*` stands for any one segment. */
  readonly path: string;
  /** The first matching call that is hit, counted from 1 since the fault was added. */
  readonly nth: number;
  readonly times: number;
  readonly delayMs: number;
  readonly seen: number;
}

export type EventFaultKind =
  | 'drop'
  | 'duplicate_same_id'
  | 'duplicate_new_id'
  | 'delay'
  | 'hold'
  | 'reorder'
  | 'stale_timestamp'
  | 'wrong_secret';

export interface EventFaultRecord extends Stored {
  readonly kind: EventFaultKind;
  /** An event type, or a group such as `refund.*`, or `*`. */
  readonly eventType: string;
  readonly delayMs: number;
  readonly timesLeft: number;
}

export interface RequestRecord extends Stored {
  readonly atMs: number;
  readonly method: string;
  readonly path: string;
  readonly parameters: Json;
  readonly idempotencyKey: string | null;
  readonly apiVersion: string | null;
  readonly status: number | null;
  readonly replayed: boolean;
  readonly fault: RequestFaultKind | null;
}

/** Either an offset to the machine's clock, or a fixed instant while frozen. */
export interface ClockRecord extends Stored {
  readonly offsetMs: number;
  readonly frozenAtMs: number | null;
}

export interface SettingsRecord extends Stored {
  readonly webhookUrl: string | null;
  readonly webhookSecret: string;
  /** Which clock stamps the signatures: the stand-in's own, or the machine's while the two differ. */
  readonly signatureTime: 'clock' | 'machine';
  readonly redirect: 'before_webhook' | 'after_webhook';
  /** While true a refund beyond the available balance stays pending; otherwise the balance may go below zero. */
  readonly shortBalance: boolean;
  /** How long a new charge has no balance transaction yet. */
  readonly feeDelayMs: number;
  /** Whether the daily payout collects a balance below zero from the bank; otherwise it is carried forward. */
  readonly negativePayouts: boolean;
}

export interface Collections {
  sessions: SessionRecord;
  intents: IntentRecord;
  cards: CardRecord;
  charges: ChargeRecord;
  refunds: RefundRecord;
  disputes: DisputeRecord;
  balanceTransactions: BalanceTransactionRecord;
  payouts: PayoutRecord;
  customers: CustomerRecord;
  events: EventRecord;
  deliveries: DeliveryRecord;
  tasks: TaskRecord;
  keys: KeyRecord;
  requestFaults: RequestFaultRecord;
  eventFaults: EventFaultRecord;
  requests: RequestRecord;
  clock: ClockRecord;
  settings: SettingsRecord;
}

export type Kind = keyof Collections;

export const KINDS = [
  'sessions',
  'intents',
  'cards',
  'charges',
  'refunds',
  'disputes',
  'balanceTransactions',
  'payouts',
  'customers',
  'events',
  'deliveries',
  'tasks',
  'keys',
  'requestFaults',
  'eventFaults',
  'requests',
  'clock',
  'settings',
] as const satisfies readonly Kind[];
