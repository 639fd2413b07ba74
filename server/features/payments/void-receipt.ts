import type { ReceiptView } from '#contract/payments';
import { reverseEntry } from '#domain/ledger/index';
import { recordAudit } from '#server/features/audit/index';
import { lockOpenDay } from '#server/features/business-days/index';
import { lockCourse } from '#server/features/courses/index';
import { postEntry, readEntry } from '#server/features/ledger/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { BrokenInvariant, conflict, notFound, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { receiptOf } from './receipts-read.ts';

declare module '#server/platform/facts' {
  interface FactMap {
    'receipt.voided': {
      readonly receiptId: number;
      readonly courseId: number | null;
      readonly siteId: number;
    };
  }
}

/**
 * Voids a receipt of the day that is still open: the number stays, a row of its own says why, and the entry is reversed
 * (invariant 2). After the close a refund is the way back.
 * @throws Problem not_found, conflict 'already_void', refused 'day_closed' | 'paid_online' | 'till_counted'
 */
export async function voidDeskReceipt(
  deps: Deps,
  receiptId: number,
  reason: string,
  actor: StaffActor,
): Promise<ReceiptView> {
  return await inTransaction(deps.db, async (trx) => {
    const known = await receiptOf(trx, receiptId);
    if (!known) throw notFound('receipt');
    mustWorkAt(actor, known.siteId, 'receipt');
    if (known.courseId !== null) await lockCourse(trx, known.courseId);
    const receipt = await receiptOf(trx, receiptId);
    if (!receipt) throw new BrokenInvariant(`Receipt ${receiptId} vanished`);
    await mustBeVoidable(trx, deps, receipt);
    await trx('receipt_voids').insert({
      receipt_id: receiptId,
      reason,
      booked_on: receipt.bookedOn,
      voided_by: actor.userId,
      recorded_at: sqlInstant(deps.clock.now()),
    });
    const entry = await readEntry(trx, { type: 'receipt', id: receiptId }, 'receipt');
    if (!entry) throw new BrokenInvariant(`Receipt ${receiptId} has no entry`);
    await postEntry(trx, deps, {
      siteId: receipt.siteId,
      source: { type: 'receipt_void', id: receiptId },
      draft: reverseEntry(
        { ...entry, kind: 'receipt', occurredOn: receipt.occurredOn },
        { occurredOn: receipt.bookedOn, memo: `Void of receipt ${receipt.number}` },
      ),
      actor,
      bookedOn: receipt.bookedOn,
      correctsEntryId: entry.entryId,
    });
    await recordAudit(trx, deps, {
      actor,
      action: 'receipt.voided',
      subjectType: 'receipt',
      subjectId: receiptId,
      siteId: receipt.siteId,
      after: { reason },
    });
    await hint(trx, deps.clock, { siteId: receipt.siteId, topic: 'receipts', subjectId: receiptId });
    await deps.facts.publish(trx, 'receipt.voided', {
      receiptId,
      courseId: receipt.courseId,
      siteId: receipt.siteId,
    });
    const voided = await receiptOf(trx, receiptId);
    if (!voided) throw new BrokenInvariant(`Receipt ${receiptId} vanished`);
    return voided;
  });
}

async function mustBeVoidable(trx: Trx, deps: Deps, receipt: ReceiptView): Promise<void> {
  if (receipt.voided) throw conflict('already_void', `Receipt ${receipt.number} was voided before.`);
  const openDay = await lockOpenDay(trx, deps, receipt.siteId);
  if (receipt.bookedOn !== openDay) {
    throw refused(
      'day_closed',
      `Receipt ${receipt.number} belongs to another day. Ask for a refund instead; nothing was changed.`,
    );
  }
  if (receipt.tenders.some((tender) => tender.tender === 'online_card')) {
    throw refused('paid_online', 'An online payment goes back as a refund to the card. Nothing was changed.');
  }
  await mustStillBeInOpenTill(trx, receipt);
}

/** Cash that was counted cannot leave the till by a void: what it should hold would no longer be what was counted. */
async function mustStillBeInOpenTill(trx: Trx, receipt: ReceiptView): Promise<void> {
  if (!receipt.tenders.some((tender) => tender.tender === 'cash')) return;
  const [shift] = await rawRows<{ state: string }>(
    trx,
    `SELECT x.state FROM receipts r JOIN till_sessions x ON x.till_session_id = r.till_session_id
     WHERE r.receipt_id = ? LOCK IN SHARE MODE`,
    [receipt.receiptId],
  );
  if (shift?.state === 'open') return;
  throw refused(
    'till_counted',
    'The till this cash went into has been counted. Give it back as a refund; nothing was changed.',
  );
}
