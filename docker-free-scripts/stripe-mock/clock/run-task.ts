import { openDispute, passDeadline } from '#stand-ins/stripe-mock/objects/disputes';
import { attachFee } from '#stand-ins/stripe-mock/objects/payments';
import { arrive, runDailyPayout, sendOnItsWay } from '#stand-ins/stripe-mock/objects/payouts';
import { failRefund, settleRefund } from '#stand-ins/stripe-mock/objects/refunds';
import { expireWhenStillOpen } from '#stand-ins/stripe-mock/objects/sessions';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { TaskKind, TaskRecord } from '#stand-ins/stripe-mock/state/records';

type Settler = (service: Service, subject: string) => void;

/** What each kind of due task does; deliveries go out by themselves. */
const SETTLERS: Readonly<Record<Exclude<TaskKind, 'deliver'>, Settler>> = {
  expire_session: expireWhenStillOpen,
  attach_fee: attachFee,
  settle_refund: (service, id) => {
    settleRefund(service, service.store.get('refunds', id));
  },
  fail_refund: (service, id) => {
    failRefund(service, service.store.get('refunds', id));
  },
  open_dispute: (service, chargeId) => dispute(service, chargeId, false),
  open_inquiry: (service, chargeId) => dispute(service, chargeId, true),
  dispute_deadline: passDeadline,
  daily_payout: runDailyPayout,
  payout_on_its_way: sendOnItsWay,
  payout_arrives: arrive,
};

export function runTask(service: Service, task: TaskRecord): void {
  if (task.kind !== 'deliver') SETTLERS[task.kind](service, task.subject);
}

function dispute(service: Service, chargeId: string, inquiry: boolean): void {
  const charge = service.store.get('charges', chargeId);
  openDispute(service, charge, { inquiry, amount: charge.amount, reason: 'fraudulent' });
}
