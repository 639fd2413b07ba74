import { processorFeeEntry } from '#domain/ledger/index';
import { addMs, type ClinicDate, dayOf, type Instant, instantAt } from '#domain/time/index';
import { lockOpenDay, zoneOf } from '#server/features/business-days/index';
import { postEntry } from '#server/features/ledger/index';
import type { BalanceMovement, StripeGateway } from '#server/gateways/index';
import { SYSTEM } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import { isDuplicate } from '#server/platform/db-errors';
import type { Deps } from '#server/platform/deps';
import { inTransaction } from '#server/platform/transaction';

export type BankDeps = Deps & { readonly gateways: { readonly stripe: StripeGateway } };

/** Movements may be told late; looking back further than they can lag costs only duplicates that are ignored. */
const OVERLAP_MS = 3 * 24 * 60 * 60 * 1000;

/**
 * Pulls the processor's balance movements since the last ones known and posts its fees: Dr 5100 Cr 1100, once per
 * movement (invariant 8). Returns how many were new.
 */
export async function pullMovements(deps: BankDeps): Promise<number> {
  const since = await pullSince(deps);
  const movements = await deps.gateways.stripe.balanceMovements({ since });
  let fresh = 0;
  for (const movement of movements) {
    if (await recordMovement(deps, movement)) fresh += 1;
  }
  return fresh;
}

async function pullSince(deps: BankDeps): Promise<Instant> {
  const [row] = await rawRows<{ last_on: ClinicDate | null; opened_on: ClinicDate | null }>(
    deps.db,
    'SELECT (SELECT MAX(happened_on) FROM balance_transactions) AS last_on, (SELECT MIN(opened_on) FROM sites) AS opened_on',
  );
  const from = row?.last_on ?? row?.opened_on;
  return from ? addMs(instantAt(from, '00:00', 'UTC'), -OVERLAP_MS) : deps.clock.now();
}

/** Stores one movement with its receipt, site and days. False when it was known. */
async function recordMovement(deps: BankDeps, movement: BalanceMovement): Promise<boolean> {
  try {
    return await inTransaction(deps.db, async (trx) => {
      const owner = await ownerOf(trx, movement.sourceId);
      const zone = await zoneOf(trx, owner.siteId);
      const bookedOn = await lockOpenDay(trx, deps, owner.siteId);
      const happenedOn = dayOf(movement.createdAt, zone);
      const id = await insertRow(trx, 'balance_transactions', {
        external_id: movement.id,
        site_id: owner.siteId,
        category: movement.category,
        source_external_id: movement.sourceId,
        currency: movement.currency,
        amount_minor: movement.amountMinor,
        fee_minor: movement.feeMinor,
        net_minor: movement.netMinor,
        happened_on: happenedOn,
        available_on: dayOf(movement.availableAt, zone),
        receipt_id: owner.receiptId,
        booked_on: bookedOn,
        recorded_at: sqlInstant(deps.clock.now()),
      });
      if (movement.feeMinor !== 0) {
        const draft = processorFeeEntry({
          occurredOn: happenedOn,
          memo: owner.receiptNumber
            ? `Card fee of receipt ${owner.receiptNumber}`
            : 'Card fee of the processor',
          currency: movement.currency,
          feeMinor: movement.feeMinor,
        });
        await postEntry(trx, deps, {
          siteId: owner.siteId,
          source: { type: 'balance_transaction', id },
          draft,
          actor: SYSTEM,
          bookedOn,
        });
      }
      return true;
    });
  } catch (error) {
    if (isDuplicate(error, 'balance_transactions_external')) return false;
    throw error;
  }
}

interface Owner {
  readonly siteId: number;
  readonly receiptId: number | null;
  readonly receiptNumber: string | null;
}

/** The receipt a movement belongs to, by its charge; what belongs to none is booked at the clinic's first site. */
async function ownerOf(trx: Trx, sourceId: string | null): Promise<Owner> {
  const [tender] = await rawRows<{ receipt_id: number; number: string; site_id: number }>(
    trx,
    `SELECT r.receipt_id, r.number, r.site_id FROM receipt_tenders t JOIN receipts r ON r.receipt_id = t.receipt_id
     WHERE t.charge_id = ?`,
    [sourceId],
  );
  if (tender) return { siteId: tender.site_id, receiptId: tender.receipt_id, receiptNumber: tender.number };
  return { siteId: await firstSite(trx), receiptId: null, receiptNumber: null };
}

/** Where the clinic's bank account is kept: its first site. */
export async function firstSite(trx: Trx): Promise<number> {
  const [site] = await rawRows<{ site_id: number }>(
    trx,
    'SELECT site_id FROM sites ORDER BY site_id LIMIT 1',
  );
  if (!site) throw new Error('There is no site yet');
  return site.site_id;
}
