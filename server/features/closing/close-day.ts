import type { Minor } from '#domain/money/index';
import { takeStep } from '#domain/state-machine';
import { DAY, type DayState, dayExceptions, mayClose } from '#domain/tills/index';
import type { ClinicDate } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { lockDayForClosing } from '#server/features/business-days/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import { isDuplicate } from '#server/platform/db-errors';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { BrokenInvariant, conflict, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { dayPicture } from './day-facts.ts';
import { readDay } from './day-read.ts';

declare module '#server/platform/facts' {
  interface FactMap {
    'day.closed': { readonly siteId: number; readonly dayOn: ClinicDate; readonly dayCloseId: number };
  }
}

interface DayKey {
  readonly siteId: number;
  readonly day: ClinicDate;
}

/** Enters the card machine's batch; entering it again replaces what counted, and both stay on record. */
export async function enterBatch(
  deps: Deps,
  { siteId, day }: DayKey,
  batch: { readonly batchNo: string; readonly amountMinor: Minor; readonly slips: number },
  actor: StaffActor,
): Promise<void> {
  mustWorkAt(actor, siteId, 'site');
  await inTransaction(deps.db, async (trx) => {
    await mustBeOpen(trx, { siteId, day });
    const [same] = await rawRows<{ terminal_batch_id: number }>(
      trx,
      `SELECT b.terminal_batch_id FROM terminal_batches b LEFT JOIN terminal_batches n ON n.replaces_batch_id = b.terminal_batch_id
       WHERE b.site_id = ? AND b.day_on = ? AND b.batch_no = ? AND n.terminal_batch_id IS NULL`,
      [siteId, day, batch.batchNo],
    );
    try {
      const batchId = await insertRow(trx, 'terminal_batches', {
        site_id: siteId,
        day_on: day,
        batch_no: batch.batchNo,
        amount_minor: batch.amountMinor,
        slips: batch.slips,
        replaces_batch_id: same?.terminal_batch_id ?? null,
        entered_by: actor.userId,
        recorded_at: sqlInstant(deps.clock.now()),
      });
      await recordAudit(trx, deps, {
        actor,
        action: 'terminal_batch.entered',
        subjectType: 'terminal_batch',
        subjectId: batchId,
        siteId,
        after: { day, ...batch },
      });
    } catch (error) {
      if (isDuplicate(error, 'terminal_batches_replaces'))
        throw conflict('batch_entered', 'Somebody has just entered this batch. Look again.');
      throw error;
    }
    await hint(trx, deps.clock, { siteId, topic: 'day' });
  });
}

/**
 * Says that the day is complete: the first of two people. Nothing blocking may be left.
 * @throws Problem conflict naming the refused step, refused 'exceptions_left'
 */
export async function countDayComplete(deps: Deps, key: DayKey, actor: StaffActor): Promise<void> {
  mustWorkAt(actor, key.siteId, 'site');
  await inTransaction(deps.db, async (trx) => {
    await lockFor(trx, key, 'counted');
    await mustHaveNothingBlocking(trx, key);
    await trx('business_days')
      .where({ site_id: key.siteId, day_on: key.day })
      .update({ state: 'counted', counted_by: actor.userId, counted_at: sqlInstant(deps.clock.now()) });
    await recordAudit(trx, deps, {
      actor,
      action: 'day.counted',
      subjectType: 'business_day',
      subjectId: key.day,
      siteId: key.siteId,
    });
    await hint(trx, deps.clock, { siteId: key.siteId, topic: 'day' });
  });
}

/**
 * Closes a counted day as the second person (invariant 18). What is true at this moment is frozen; nothing is booked on the
 * day afterwards (invariant 3), for every posting share-locks the row that this locks exclusively.
 */
export async function closeSiteDay(deps: Deps, key: DayKey, actor: StaffActor): Promise<number> {
  mustWorkAt(actor, key.siteId, 'site');
  return await inTransaction(deps.db, async (trx) => {
    await lockFor(trx, key, 'closed');
    const [row] = await rawRows<{ counted_by: number | null }>(
      trx,
      'SELECT counted_by FROM business_days WHERE site_id = ? AND day_on = ?',
      [key.siteId, key.day],
    );
    const countedBy = row?.counted_by;
    if (countedBy === null || countedBy === undefined)
      throw new BrokenInvariant('A counted day names nobody');
    if (countedBy === actor.userId)
      throw refused('same_person', 'Another person closes the day you counted. It stays counted.');
    await mustHaveNothingBlocking(trx, key);
    const closedAt = sqlInstant(deps.clock.now());
    await trx('business_days')
      .where({ site_id: key.siteId, day_on: key.day })
      .update({ state: 'closed', closed_at: closedAt });
    const [last] = await rawRows<{ n: number }>(
      trx,
      'SELECT COALESCE(MAX(version_no), 0) AS n FROM day_closes WHERE site_id = ? AND day_on = ?',
      [key.siteId, key.day],
    );
    const dayCloseId = await insertRow(trx, 'day_closes', {
      site_id: key.siteId,
      day_on: key.day,
      version_no: (last?.n ?? 0) + 1,
      content: JSON.stringify(await readDay(trx, key.siteId, key.day, actor.userId)),
      chain_head: await chainHead(trx),
      asked_by: countedBy,
      closed_by: actor.userId,
      closed_at: closedAt,
    });
    await recordAudit(trx, deps, {
      actor,
      action: 'day.closed',
      subjectType: 'business_day',
      subjectId: key.day,
      siteId: key.siteId,
      after: { dayCloseId },
    });
    await hint(trx, deps.clock, { siteId: key.siteId, topic: 'day' });
    await deps.facts.publish(trx, 'day.closed', { siteId: key.siteId, dayOn: key.day, dayCloseId });
    return dayCloseId;
  });
}

async function chainHead(trx: Trx): Promise<Buffer | null> {
  const [head] = await rawRows<{ seal_hash: Buffer }>(
    trx,
    'SELECT seal_hash FROM audit_seals ORDER BY audit_seal_id DESC LIMIT 1',
  );
  return head?.seal_hash ?? null;
}

async function mustBeOpen(trx: Trx, { siteId, day }: DayKey): Promise<void> {
  const [row] = await rawRows<{ state: DayState }>(
    trx,
    'SELECT state FROM business_days WHERE site_id = ? AND day_on = ? LOCK IN SHARE MODE',
    [siteId, day],
  );
  if (!row) throw conflict('day_not_opened', 'Nothing has happened on this day yet.');
  if (row.state === 'closed') throw conflict('day_closed', 'This day is closed. Nothing was changed.');
}

async function lockFor(trx: Trx, { siteId, day }: DayKey, to: DayState): Promise<void> {
  const row = await lockDayForClosing(trx, siteId, day);
  if (!row) throw conflict('day_not_opened', 'Nothing has happened on this day yet.');
  const step = takeStep(DAY, row.state, to);
  if (!step.ok) throw conflict(step.code, `${step.words} Nothing was changed.`);
}

async function mustHaveNothingBlocking(trx: Trx, { siteId, day }: DayKey): Promise<void> {
  const exceptions = dayExceptions((await dayPicture(trx, siteId, day)).facts);
  if (mayClose(exceptions)) return;
  const words = exceptions.filter((each) => each.blocking).map((each) => each.words);
  throw refused('exceptions_left', `${words.join(' ')} The day stays as it is.`);
}
