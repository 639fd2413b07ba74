import { refused } from '#stand-ins/stripe-mock/api/errors';
import { SECOND_MS } from '#stand-ins/stripe-mock/clock/clock';
import { schedule, unschedule } from '#stand-ins/stripe-mock/clock/tasks';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import { stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type {
  ChargeRecord,
  DisputeRecord,
  DisputeStatus,
  Metadata,
} from '#stand-ins/stripe-mock/state/records';
import { emit } from '#stand-ins/stripe-mock/webhooks/events';
import { book } from './balance.ts';
import { DISPUTE_FEE } from './fees.ts';

const SECONDS_TO_RESPOND = 9 * 86_400;

export interface DisputeOpening {
  readonly inquiry: boolean;
  /** Minor units; may exceed the charge. */
  readonly amount: number;
  readonly reason: string;
}

/** The payer's bank disputes a charge: a chargeback takes the money and a fee at once, an inquiry only asks. */
export function openDispute(service: Service, charge: ChargeRecord, opening: DisputeOpening): DisputeRecord {
  if (charge.status !== 'succeeded') throw refused('Only a paid charge can be disputed.');
  const before = present(service, 'charges', charge);
  const created = stamp(service, newId('dp'));
  const dispute = service.store.put('disputes', {
    ...created,
    ...opening,
    status: opening.inquiry ? 'warning_needs_response' : 'needs_response',
    currency: charge.currency,
    chargeId: charge.id,
    intentId: charge.intentId,
    evidence: {},
    submissionCount: 0,
    dueBy: created.created + SECONDS_TO_RESPOND,
    metadata: {},
    balanceTransactions: [],
  });
  schedule(service, 'dispute_deadline', dispute.id, dispute.dueBy * SECOND_MS);
  emit(service, 'charge.dispute.created', 'disputes', dispute);
  emit(service, 'charge.updated', 'charges', charge, before);
  return opening.inquiry ? dispute : withdraw(service, dispute);
}

function withdraw(service: Service, dispute: DisputeRecord): DisputeRecord {
  const row = book(service, {
    type: 'adjustment',
    reportingCategory: 'dispute',
    amount: -dispute.amount,
    fee: DISPUTE_FEE,
    feeDescription: 'Dispute fee of the invented tariff',
    currency: dispute.currency,
    source: dispute.id,
    description: `Chargeback withdrawal for ${dispute.chargeId}`,
  });
  return addRow(service, dispute, row.id, 'charge.dispute.funds_withdrawn');
}

function reinstate(service: Service, dispute: DisputeRecord): DisputeRecord {
  const row = book(service, {
    type: 'adjustment',
    reportingCategory: 'dispute_reversal',
    amount: dispute.amount,
    currency: dispute.currency,
    source: dispute.id,
    description: `Chargeback reversal for ${dispute.chargeId}`,
  });
  return addRow(service, dispute, row.id, 'charge.dispute.funds_reinstated');
}

function addRow(service: Service, dispute: DisputeRecord, rowId: string, event: string): DisputeRecord {
  const before = present(service, 'disputes', dispute);
  const changed = service.store.put('disputes', {
    ...dispute,
    balanceTransactions: [...dispute.balanceTransactions, rowId],
  });
  emit(service, event, 'disputes', changed, before);
  return changed;
}

export interface DisputeAnswer {
  /** Fields to set; an empty text takes a field away. */
  readonly evidence: Readonly<Record<string, string>>;
  readonly metadata: Metadata;
  /** Whether to hand the evidence to the bank now; otherwise it is only kept. */
  readonly submit: boolean;
}

/** @throws ApiError when evidence comes for a dispute that no longer waits for it */
export function updateDispute(
  service: Service,
  dispute: DisputeRecord,
  answer: DisputeAnswer,
): DisputeRecord {
  const merged = { ...dispute.evidence, ...answer.evidence };
  const evidence = Object.fromEntries(Object.entries(merged).filter(([, text]) => text !== ''));
  const brings = Object.keys(answer.evidence).length > 0;
  const submits = answer.submit && Object.keys(evidence).length > 0;
  if (brings && !awaitsResponse(dispute)) {
    throw refused(`This dispute is ${dispute.status}; evidence can no longer be changed.`, {
      param: 'evidence',
    });
  }
  const before = present(service, 'disputes', dispute);
  const submitted = submits && awaitsResponse(dispute);
  const changed = service.store.put('disputes', {
    ...dispute,
    evidence,
    metadata: answer.metadata,
    status: submitted ? reviewOf(dispute) : dispute.status,
    submissionCount: dispute.submissionCount + (submitted ? 1 : 0),
  });
  emit(service, 'charge.dispute.updated', 'disputes', changed, before);
  return changed;
}

/** The bank decides. An inquiry closes without moving money; a chargeback is won or lost. */
export function decideDispute(service: Service, dispute: DisputeRecord, won: boolean): DisputeRecord {
  if (isClosed(dispute)) throw refused(`This dispute is already closed: ${dispute.status}.`);
  unschedule(service, 'dispute_deadline', dispute.id);
  const before = present(service, 'disputes', dispute);
  const status: DisputeStatus = dispute.inquiry ? 'warning_closed' : won ? 'won' : 'lost';
  const closed = service.store.put('disputes', { ...dispute, status });
  emit(service, 'charge.dispute.closed', 'disputes', closed, before);
  return status === 'won' ? reinstate(service, closed) : closed;
}

/** Nobody answered in time: silence loses. */
export function passDeadline(service: Service, disputeId: string): void {
  const dispute = service.store.get('disputes', disputeId);
  if (awaitsResponse(dispute)) decideDispute(service, dispute, false);
}

function awaitsResponse({ status }: DisputeRecord): boolean {
  return status === 'needs_response' || status === 'warning_needs_response';
}

function isClosed({ status }: DisputeRecord): boolean {
  return status === 'won' || status === 'lost' || status === 'warning_closed';
}

function reviewOf(dispute: DisputeRecord): DisputeStatus {
  return dispute.inquiry ? 'warning_under_review' : 'under_review';
}
