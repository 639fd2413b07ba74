import { payoutEntry } from '#domain/ledger/index';
import { formatAmount, type Minor, minor, sum } from '#domain/money/index';
import {
  type ClinicDate,
  dayOf,
  formatDay,
  type Instant,
  instantAt,
  instantOfMs,
  msOf,
} from '#domain/time/index';
import { lockOpenDay, zoneOf } from '#server/features/business-days/index';
import { postEntry } from '#server/features/ledger/index';
import type { BalanceMovement, ProcessorPayout } from '#server/gateways/index';
import { SYSTEM } from '#server/platform/actor';
import { rawRows, readMinor, sqlInstant, type Trx } from '#server/platform/db';
import { hint } from '#server/platform/live-hints';
import { inTransaction } from '#server/platform/transaction';
import { type BankDeps, firstSite, pullMovements } from './pull-movements.ts';

declare module '#server/platform/facts' {
  interface FactMap {
    'payout.tied': { readonly payoutId: number; readonly siteId: number };
  }
}

/** A payout may still fail a while after it was paid; looking back this far hears of it. */
const LOOK_BACK_MS = 35 * 24 * 60 * 60 * 1000;

/**
 * Pulls payouts, ties each of its movements to what we took, and posts those that are paid: Dr 1000 Cr 1100.
 * Resumable and repeatable; a payout is tied only when its movements add up to it to the cent. Returns how many were tied now.
 */
export async function pullPayouts(deps: BankDeps): Promise<number> {
  await pullMovements(deps);
  let tied = 0;
  for (const payout of await deps.gateways.stripe.payouts(await lookBack(deps))) {
    const known = await storePayout(deps, payout);
    if (known.tied || payout.status !== 'paid') continue;
    const movements = await deps.gateways.stripe.balanceMovements({ payoutId: payout.id });
    if (await tiePayout(deps, known.payoutId, payout, movements)) tied += 1;
  }
  return tied;
}

async function lookBack(deps: BankDeps): Promise<Instant> {
  const [row] = await rawRows<{ opened_on: ClinicDate | null }>(
    deps.db,
    'SELECT MIN(opened_on) AS opened_on FROM sites',
  );
  const floor = row?.opened_on ? instantAt(row.opened_on, '00:00', 'UTC') : deps.clock.now();
  return instantOfMs(Math.max(msOf(floor), msOf(deps.clock.now()) - LOOK_BACK_MS));
}

async function storePayout(
  deps: BankDeps,
  payout: ProcessorPayout,
): Promise<{ payoutId: number; tied: boolean }> {
  return await inTransaction(deps.db, async (trx) => {
    const siteId = await firstSite(trx);
    const zone = await zoneOf(trx, siteId);
    const now = sqlInstant(deps.clock.now());
    await trx.raw(
      `INSERT INTO payouts (external_id, site_id, currency, amount_minor, created_on, arrives_on, state, recorded_at, changed_at)
       VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)
       ON DUPLICATE KEY UPDATE state = VALUES(state), arrives_on = VALUES(arrives_on),
         changed_at = IF(state = VALUES(state), changed_at, VALUES(changed_at))`,
      [
        payout.id,
        siteId,
        payout.currency,
        payout.amountMinor,
        dayOf(payout.createdAt, zone),
        dayOf(payout.arrivesAt, zone),
        payout.status,
        now,
        now,
      ],
    );
    const [row] = await rawRows<{ payout_id: number; tied_at: Instant | null }>(
      trx,
      'SELECT payout_id, tied_at FROM payouts WHERE external_id = ?',
      [payout.id],
    );
    if (!row) throw new Error(`Payout ${payout.id} was not stored`);
    return { payoutId: row.payout_id, tied: row.tied_at !== null };
  });
}

/** Ties and posts in one transaction; false when a movement is missing or the sums differ: then it waits and shows. */
async function tiePayout(
  deps: BankDeps,
  payoutId: number,
  payout: ProcessorPayout,
  movements: readonly BalanceMovement[],
): Promise<boolean> {
  return await inTransaction(deps.db, async (trx) => {
    const own = movements.filter((movement) => movement.category !== 'payout');
    if (sum(own.map((movement) => movement.netMinor)) !== payout.amountMinor) {
      deps.log.warn({ payoutId }, 'the movements of a payout do not add up to it');
      return false;
    }
    if ((await knownNet(trx, own)) !== payout.amountMinor) return false;
    const siteId = await firstSite(trx);
    const bookedOn = await lockOpenDay(trx, deps, siteId);
    const [row] = await rawRows<{ tied_at: Instant | null }>(
      trx,
      'SELECT tied_at FROM payouts WHERE payout_id = ? FOR UPDATE',
      [payoutId],
    );
    if (row?.tied_at !== null) return false;
    await trx('balance_transactions')
      .whereIn(
        'external_id',
        movements.map((movement) => movement.id),
      )
      .update({ payout_id: payoutId });
    await trx('payouts')
      .where({ payout_id: payoutId })
      .update({ tied_at: sqlInstant(deps.clock.now()), booked_on: bookedOn });
    const arrivedOn = dayOf(payout.arrivesAt, await zoneOf(trx, siteId));
    const draft = payoutEntry({
      occurredOn: arrivedOn,
      memo: `Payout of ${formatAmount(payout.amountMinor, payout.currency)}, ${formatDay(arrivedOn)}`,
      currency: payout.currency,
      amountMinor: payout.amountMinor,
    });
    await postEntry(trx, deps, {
      siteId,
      source: { type: 'payout', id: payoutId },
      draft,
      actor: SYSTEM,
      bookedOn,
    });
    await hint(trx, deps.clock, { siteId, topic: 'payouts', subjectId: payoutId });
    await deps.facts.publish(trx, 'payout.tied', { payoutId, siteId });
    return true;
  });
}

/** What our own records say the movements come to: every one must have been pulled and posted before. */
async function knownNet(trx: Trx, movements: readonly BalanceMovement[]): Promise<Minor> {
  if (movements.length === 0) return minor(0);
  const [row] = await rawRows<{ net: unknown }>(
    trx,
    `SELECT SUM(net_minor) AS net FROM balance_transactions WHERE external_id IN (${movements.map(() => '?').join(',')})`,
    movements.map((movement) => movement.id),
  );
  return readMinor(row?.net);
}
