import { decideDispute, updateDispute } from '#stand-ins/stripe-mock/objects/disputes';
import { EVIDENCE_FIELDS } from '#stand-ins/stripe-mock/objects/evidence';
import { cancelRefund, createRefund } from '#stand-ins/stripe-mock/objects/refunds';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { DisputeRecord, RefundRecord } from '#stand-ins/stripe-mock/state/records';
import { emit } from '#stand-ins/stripe-mock/webhooks/events';
import { noSuch, ParameterError } from './errors.ts';
import { asked, listRecords, PAGE } from './lists.ts';
import {
  boolean,
  clearableText,
  integer,
  mergeMetadata,
  metadata,
  object,
  oneOf,
  type Reader,
  text,
  timeRange,
  within,
} from './parameters.ts';
import { route } from './route.ts';

const REFUNDS = '/v1/refunds';
const DISPUTES = '/v1/disputes';

const OF_A_PAYMENT = { ...PAGE, created: timeRange(), charge: text(), payment_intent: text() };

const EVIDENCE = Object.fromEntries(EVIDENCE_FIELDS.map((field) => [field, clearableText()])) as Record<
  (typeof EVIDENCE_FIELDS)[number],
  Reader<string | undefined>
>;

export const moneyBackRoutes = [
  route(
    'POST',
    REFUNDS,
    {
      charge: text(),
      payment_intent: text(),
      amount: integer({ least: 1 }),
      reason: oneOf('duplicate', 'fraudulent', 'requested_by_customer'),
      metadata: metadata(),
    },
    (service, parameters) => {
      if ((parameters.charge === undefined) === (parameters.payment_intent === undefined)) {
        throw new ParameterError(
          'charge',
          'parameter_missing',
          'One of the following params should be provided for this request: payment_intent or charge.',
        );
      }
      const refund = createRefund(service, {
        charge: parameters.charge ?? null,
        paymentIntent: parameters.payment_intent ?? null,
        amount: parameters.amount ?? null,
        reason: parameters.reason ?? null,
        metadata: mergeMetadata({}, parameters.metadata),
      });
      return present(service, 'refunds', refund);
    },
  ),
  route('GET', REFUNDS, OF_A_PAYMENT, (service, filter) =>
    listRecords(
      service,
      'refunds',
      { url: REFUNDS, noun: 'refund', page: filter },
      (refund) =>
        within(filter.created, refund.created) &&
        asked(filter.charge, refund.chargeId) &&
        asked(filter.payment_intent, refund.intentId),
    ),
  ),
  route('GET', `${REFUNDS}/:id`, {}, (service, _, id) => present(service, 'refunds', refundOf(service, id))),
  route('POST', `${REFUNDS}/:id`, { metadata: metadata() }, (service, parameters, id) => {
    const refund = refundOf(service, id);
    const before = present(service, 'refunds', refund);
    const changed = service.store.put('refunds', {
      ...refund,
      metadata: mergeMetadata(refund.metadata, parameters.metadata),
    });
    emit(service, 'refund.updated', 'refunds', changed, before);
    emit(service, 'charge.refund.updated', 'refunds', changed, before);
    return present(service, 'refunds', changed);
  }),
  route('POST', `${REFUNDS}/:id/cancel`, {}, (service, _, id) =>
    present(service, 'refunds', cancelRefund(service, refundOf(service, id))),
  ),
  route('GET', DISPUTES, OF_A_PAYMENT, (service, filter) =>
    listRecords(
      service,
      'disputes',
      { url: DISPUTES, noun: 'dispute', page: filter },
      (dispute) =>
        within(filter.created, dispute.created) &&
        asked(filter.charge, dispute.chargeId) &&
        asked(filter.payment_intent, dispute.intentId),
    ),
  ),
  route('GET', `${DISPUTES}/:id`, {}, (service, _, id) =>
    present(service, 'disputes', disputeOf(service, id)),
  ),
  route(
    'POST',
    `${DISPUTES}/:id`,
    { evidence: object(EVIDENCE), metadata: metadata(), submit: boolean() },
    (service, parameters, id) => {
      const dispute = disputeOf(service, id);
      const sent = Object.entries(parameters.evidence ?? {}).flatMap(([field, value]) =>
        value === undefined ? [] : [[field, value] as const],
      );
      const updated = updateDispute(service, dispute, {
        evidence: Object.fromEntries(sent),
        metadata: mergeMetadata(dispute.metadata, parameters.metadata),
        submit: parameters.submit ?? true,
      });
      return present(service, 'disputes', updated);
    },
  ),
  route('POST', `${DISPUTES}/:id/close`, {}, (service, _, id) =>
    present(service, 'disputes', decideDispute(service, disputeOf(service, id), false)),
  ),
];

function refundOf(service: Service, id: string): RefundRecord {
  const refund = service.store.find('refunds', id);
  if (refund === undefined) throw noSuch('refund', id);
  return refund;
}

function disputeOf(service: Service, id: string): DisputeRecord {
  const dispute = service.store.find('disputes', id);
  if (dispute === undefined) throw noSuch('dispute', id);
  return dispute;
}
