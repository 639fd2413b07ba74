import {
  ACCOUNT,
  tillDifferenceEntry,
  tillDropEntry,
  tillFloatEntry,
  tillPaidOutEntry,
} from '#domain/ledger/index';
import { type Minor, subtract } from '#domain/money/index';
import { takeStep } from '#domain/state-machine';
import {
  type CashCount,
  checkTillClose,
  countCash,
  denominationsOf,
  TILL,
  type TillState,
  tillDifference,
} from '#domain/tills/index';
import { recordAudit } from '#server/features/audit/index';
import { lockOpenDay } from '#server/features/business-days/index';
import { postEntry, tillBalance } from '#server/features/ledger/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import { isDuplicate } from '#server/platform/db-errors';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { conflict, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { currencyOf, expectedCash, lockTillSession, type TillSessionRow } from './till-repository.ts';

/**
 * Opens a till with its counted float. What the float is more or less than the till held overnight comes from or goes to petty
 * cash. @throws Problem not_found, conflict 'till_open'
 */
export async function openTillShift(
  deps: Deps,
  tillId: number,
  floatMinor: Minor,
  actor: StaffActor,
): Promise<number> {
  return await inTransaction(deps.db, async (trx) => {
    const [till] = await rawRows<{ site_id: number; name: string }>(
      trx,
      'SELECT site_id, name FROM tills WHERE till_id = ? FOR UPDATE',
      [tillId],
    );
    if (!till) throw notFound('till');
    mustWorkAt(actor, till.site_id, 'till');
    const dayOn = await lockOpenDay(trx, deps, till.site_id);
    const tillSessionId = await insertShift(trx, deps, {
      tillId,
      siteId: till.site_id,
      dayOn,
      floatMinor,
      openedBy: actor.userId,
    });
    const added = subtract(floatMinor, await tillBalance(trx, tillId, ACCOUNT.till));
    if (added !== 0) {
      const draft = tillFloatEntry({
        tillId,
        amountMinor: added,
        from: 'petty_cash',
        occurredOn: dayOn,
        memo: `Float of ${till.name}`,
        currency: await currencyOf(trx),
      });
      await postEntry(trx, deps, {
        siteId: till.site_id,
        source: { type: 'till_session', id: tillSessionId },
        draft,
        actor,
        bookedOn: dayOn,
      });
    }
    await note(trx, deps, actor, 'till.opened', { tillSessionId, siteId: till.site_id }, { floatMinor });
    return tillSessionId;
  });
}

async function insertShift(
  trx: Trx,
  deps: Deps,
  shift: { tillId: number; siteId: number; dayOn: string; floatMinor: Minor; openedBy: number },
): Promise<number> {
  try {
    return await insertRow(trx, 'till_sessions', {
      till_id: shift.tillId,
      site_id: shift.siteId,
      day_on: shift.dayOn,
      state: 'open',
      float_minor: shift.floatMinor,
      opened_by: shift.openedBy,
      opened_at: sqlInstant(deps.clock.now()),
    });
  } catch (error) {
    if (isDuplicate(error, 'till_sessions_one_open'))
      throw conflict('till_open', 'This till is open already. Count and close it first.');
    throw error;
  }
}

/** Moves cash out of an open till: to the safe, or for something small. Never more than it holds. */
export async function moveCash(
  deps: Deps,
  tillSessionId: number,
  move: { readonly kind: 'drop' | 'paid_out'; readonly amountMinor: Minor; readonly reason: string },
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const shift = await shiftFor(trx, tillSessionId, actor);
    if (shift.state !== 'open')
      throw conflict('till_not_open', `This till is ${shift.state}. Nothing was moved.`);
    if (move.amountMinor > (await tillBalance(trx, shift.tillId, ACCOUNT.till))) {
      throw refused('more_than_held', 'The till does not hold as much. Nothing was moved.', 'amountMinor');
    }
    const bookedOn = await lockOpenDay(trx, deps, shift.siteId);
    const movementId = await insertRow(trx, 'till_movements', {
      till_session_id: tillSessionId,
      kind: move.kind,
      amount_minor: move.amountMinor,
      reason: move.reason,
      user_id: actor.userId,
      recorded_at: sqlInstant(deps.clock.now()),
    });
    const entry = move.kind === 'drop' ? tillDropEntry : tillPaidOutEntry;
    const draft = entry({
      tillId: shift.tillId,
      amountMinor: move.amountMinor,
      occurredOn: bookedOn,
      memo: `${shift.tillName}: ${move.reason}`,
      currency: await currencyOf(trx),
    });
    await postEntry(trx, deps, {
      siteId: shift.siteId,
      source: { type: 'till_movement', id: movementId },
      draft,
      actor,
      bookedOn,
    });
    await note(trx, deps, actor, `till.${move.kind}`, shift, {
      amountMinor: move.amountMinor,
      reason: move.reason,
    });
  });
}

/** Counts a till blind, piece by piece; the same till may be counted again until it is closed. */
export async function countTillCash(
  deps: Deps,
  tillSessionId: number,
  count: CashCount,
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const shift = await shiftFor(trx, tillSessionId, actor);
    mustStep(shift, 'counted');
    const counted = countCash(denominationsOf(await currencyOf(trx)), count);
    if (!counted.ok) {
      throw new Problem('invalid_input', {
        detail: 'The count has pieces that cannot be. Nothing was saved.',
        fields: counted.refusals.map(({ field, words }) => ({ field, message: words })),
      });
    }
    const expected = await expectedCash(trx, shift);
    await trx('till_sessions')
      .where({ till_session_id: tillSessionId })
      .update({
        state: 'counted',
        counted_minor: counted.amountMinor,
        counted_denominations: JSON.stringify(count),
        should_hold_minor: expected.amountMinor,
        counted_by: actor.userId,
        counted_at: sqlInstant(deps.clock.now()),
        difference_reason: null,
      });
    await note(trx, deps, actor, 'till.counted', shift, {
      countedMinor: counted.amountMinor,
      shouldHoldMinor: expected.amountMinor,
    });
  });
}

/** Keeps the reason of a difference. */
export async function explainTillDifference(
  deps: Deps,
  tillSessionId: number,
  reason: string,
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const shift = await shiftFor(trx, tillSessionId, actor);
    if (shift.state !== 'counted')
      throw conflict('till_not_counted', `This till is ${shift.state}. Nothing was saved.`);
    await trx('till_sessions')
      .where({ till_session_id: tillSessionId })
      .update({ difference_reason: reason });
    await note(trx, deps, actor, 'till.explained', shift, { reason });
  });
}

/**
 * Closes a counted till as the second person: the difference is posted, the next float stays, the rest goes to the bank.
 * @throws Problem refused naming what is missing: not counted, no reason, the same person, a float larger than the count
 */
export async function closeTillShift(
  deps: Deps,
  tillSessionId: number,
  nextFloatMinor: Minor,
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const shift = await shiftFor(trx, tillSessionId, actor);
    const countedMinor = shift.countedMinor ?? (0 as Minor);
    const differenceMinor = tillDifference(countedMinor, shift.shouldHoldMinor ?? countedMinor);
    const [refusal] = checkTillClose({
      state: shift.state,
      differenceMinor,
      reason: shift.differenceReason,
      countedBy: shift.countedById,
      closedBy: actor.userId,
    });
    if (refusal) throw refused(refusal.code, `${refusal.words} Nothing was closed.`, refusal.field);
    if (nextFloatMinor > countedMinor)
      throw refused(
        'float_too_large',
        'The till does not hold as much for the next float.',
        'nextFloatMinor',
      );
    const bookedOn = await lockOpenDay(trx, deps, shift.siteId);
    const at = { tillId: shift.tillId, occurredOn: bookedOn, currency: await currencyOf(trx) };
    const source = { type: 'till_session', id: tillSessionId };
    if (differenceMinor !== 0) {
      const draft = tillDifferenceEntry({
        ...at,
        differenceMinor,
        memo: `${shift.tillName}: ${shift.differenceReason ?? ''}`.slice(0, 200),
      });
      await postEntry(trx, deps, { siteId: shift.siteId, source, draft, actor, bookedOn });
    }
    const banked = subtract(countedMinor, nextFloatMinor);
    if (banked > 0) {
      const draft = tillDropEntry({ ...at, amountMinor: banked, memo: `${shift.tillName}: to the bank` });
      await postEntry(trx, deps, { siteId: shift.siteId, source, draft, actor, bookedOn });
    }
    await trx('till_sessions')
      .where({ till_session_id: tillSessionId })
      .update({
        state: 'closed',
        closed_by: actor.userId,
        closed_at: sqlInstant(deps.clock.now()),
        next_float_minor: nextFloatMinor,
      });
    await note(trx, deps, actor, 'till.closed', shift, {
      differenceMinor,
      bankedMinor: banked,
      nextFloatMinor,
    });
  });
}

async function shiftFor(trx: Trx, tillSessionId: number, actor: StaffActor): Promise<TillSessionRow> {
  const shift = await lockTillSession(trx, tillSessionId);
  if (!shift) throw notFound('till');
  mustWorkAt(actor, shift.siteId, 'till');
  return shift;
}

function mustStep(shift: TillSessionRow, to: TillState): void {
  const step = takeStep(TILL, shift.state, to);
  if (!step.ok) throw conflict(step.code, `${step.words} Nothing was changed.`);
}

async function note(
  trx: Trx,
  deps: Deps,
  actor: StaffActor,
  action: string,
  about: { readonly tillSessionId: number; readonly siteId: number },
  after: unknown,
): Promise<void> {
  await recordAudit(trx, deps, {
    actor,
    action,
    subjectType: 'till_session',
    subjectId: about.tillSessionId,
    siteId: about.siteId,
    after,
  });
  await hint(trx, deps.clock, { siteId: about.siteId, topic: 'tills', subjectId: about.tillSessionId });
}
