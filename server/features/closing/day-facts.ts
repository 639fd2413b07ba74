import type { Derivation } from '#domain/derivation';
import { type CurrencyCode, formatAmount, type Minor, minor, sum, ZERO } from '#domain/money/index';
import { TENDER_LABEL, TENDERS, type Tender } from '#domain/payments/index';
import { type DayFacts, tillDifference } from '#domain/tills/index';
import type { ClinicDate } from '#domain/time/index';
import {
  currencyOf,
  expectedCash,
  type TillSessionRow,
  tillSessionsOfDay,
} from '#server/features/tills/index';
import { type Db, rawRows, readMinor, type Trx } from '#server/platform/db';

/** A tender's takings of a day beside what proves them. */
export interface TakingRow {
  readonly tender: Tender;
  readonly receiptsMinor: Minor;
  readonly receiptsWhy: Derivation;
  /** null: proved later, by the bank or the lender. */
  readonly proofMinor: Minor | null;
  /** What the proof is, in words. */
  readonly by: string;
}

export interface TillOfDay {
  readonly session: TillSessionRow;
  readonly shouldHoldMinor: Minor | null;
  readonly shouldHoldWhy: Derivation | null;
  readonly differenceMinor: Minor | null;
}

/** Everything about a site's day that closing looks at. Read it inside the closing transaction, or for the screen. */
export interface DayPicture {
  readonly currency: CurrencyCode;
  readonly receiptCount: number;
  readonly tills: readonly TillOfDay[];
  readonly takings: readonly TakingRow[];
  readonly facts: DayFacts;
}

interface Batch {
  readonly batchNo: string;
  readonly amountMinor: Minor;
  readonly slips: number;
}

export async function dayPicture(trx: Db | Trx, siteId: number, day: ClinicDate): Promise<DayPicture> {
  const currency = await currencyOf(trx);
  const tills = await tillsOfDay(trx, siteId, day);
  const taken = await takenByTender(trx, siteId, day);
  const batches = await batchesOf(trx, siteId, day);
  const online = await onlineProof(trx, siteId, day);
  const takings = TENDERS.map((tender) =>
    takingRow(tender, taken.get(tender), { tills, batches, online, currency }),
  ).filter((row): row is TakingRow => row !== null);
  const [counts] = await rawRows<{ receipts: number; approvals: number; quarantined: number }>(
    trx,
    `SELECT (SELECT COUNT(*) FROM receipts WHERE site_id = ? AND booked_on = ?) AS receipts,
            (SELECT COUNT(*) FROM approvals WHERE site_id = ? AND state = 'asked') AS approvals,
            (SELECT COUNT(*) FROM checkout_attempts WHERE site_id = ? AND state = 'quarantined') AS quarantined`,
    [siteId, day, siteId, siteId],
  );
  const facts: DayFacts = {
    tills: tills.map(({ session, differenceMinor }) => ({
      name: session.tillName,
      state: session.state,
      differenceMinor,
      reason: session.differenceReason,
    })),
    takings: takings.map(({ tender, receiptsMinor, proofMinor }) => ({ tender, receiptsMinor, proofMinor })),
    terminalReceipts: taken.get('card_machine')?.count ?? 0,
    batchEntered: batches.length > 0,
    refundsWaiting: { count: 0, amountMinor: ZERO },
    approvalsWaiting: counts?.approvals ?? 0,
    quarantined: counts?.quarantined ?? 0,
  };
  return { currency, receiptCount: counts?.receipts ?? 0, tills, takings, facts };
}

async function tillsOfDay(trx: Db | Trx, siteId: number, day: ClinicDate): Promise<TillOfDay[]> {
  const found: TillOfDay[] = [];
  for (const session of await tillSessionsOfDay(trx, siteId, day)) {
    const expected = session.state === 'open' ? null : await expectedCash(trx, session);
    found.push({
      session,
      shouldHoldMinor: expected?.amountMinor ?? null,
      shouldHoldWhy: expected?.why ?? null,
      differenceMinor:
        expected && session.countedMinor !== null
          ? tillDifference(session.countedMinor, expected.amountMinor)
          : null,
    });
  }
  return found;
}

interface Taken {
  readonly count: number;
  readonly amountMinor: Minor;
  readonly changeMinor: Minor;
}

/** What receipts that stand took by tender; change comes off the cash. */
async function takenByTender(trx: Db | Trx, siteId: number, day: ClinicDate): Promise<Map<Tender, Taken>> {
  const rows = await rawRows<{ tender: Tender; n: number; amount: unknown; change_given: unknown }>(
    trx,
    `SELECT t.tender, COUNT(DISTINCT r.receipt_id) AS n, SUM(t.amount_minor) AS amount,
            SUM(IF(t.tender = 'cash' AND t.tender_no = (SELECT MIN(x.tender_no) FROM receipt_tenders x
                   WHERE x.receipt_id = r.receipt_id AND x.tender = 'cash'), r.change_minor, 0)) AS change_given
     FROM receipts r JOIN receipt_tenders t ON t.receipt_id = r.receipt_id
     LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
     WHERE r.site_id = ? AND r.booked_on = ? AND v.receipt_id IS NULL GROUP BY t.tender`,
    [siteId, day],
  );
  return new Map(
    rows.map((row) => [
      row.tender,
      { count: row.n, amountMinor: readMinor(row.amount), changeMinor: readMinor(row.change_given) },
    ]),
  );
}

/** The card machine's batches of a day; one that was entered anew counts no more. */
async function batchesOf(trx: Db | Trx, siteId: number, day: ClinicDate): Promise<Batch[]> {
  const rows = await rawRows<{ batch_no: string; amount_minor: number; slips: number }>(
    trx,
    `SELECT b.batch_no, b.amount_minor, b.slips FROM terminal_batches b
     LEFT JOIN terminal_batches n ON n.replaces_batch_id = b.terminal_batch_id
     WHERE b.site_id = ? AND b.day_on = ? AND n.terminal_batch_id IS NULL ORDER BY b.terminal_batch_id`,
    [siteId, day],
  );
  return rows.map((row) => ({
    batchNo: row.batch_no,
    amountMinor: readMinor(row.amount_minor),
    slips: row.slips,
  }));
}

/** What the processor confirmed of the day's online receipts: attempts it told us were paid, and the fees it will keep. */
async function onlineProof(
  trx: Db | Trx,
  siteId: number,
  day: ClinicDate,
): Promise<{ count: number; amountMinor: Minor; feeMinor: Minor }> {
  const [row] = await rawRows<{ n: number; amount: unknown; fee: unknown }>(
    trx,
    `SELECT COUNT(*) AS n, SUM(a.amount_minor) AS amount, SUM(b.fee_minor) AS fee
     FROM checkout_attempts a JOIN receipts r ON r.receipt_id = a.receipt_id
     LEFT JOIN balance_transactions b ON b.receipt_id = r.receipt_id AND b.category = 'charge'
     WHERE a.state = 'paid' AND r.site_id = ? AND r.booked_on = ?`,
    [siteId, day],
  );
  return { count: row?.n ?? 0, amountMinor: readMinor(row?.amount), feeMinor: readMinor(row?.fee) };
}

interface Proofs {
  readonly tills: readonly TillOfDay[];
  readonly batches: readonly Batch[];
  readonly online: { readonly count: number; readonly amountMinor: Minor; readonly feeMinor: Minor };
  readonly currency: CurrencyCode;
}

function takingRow(tender: Tender, taken: Taken | undefined, proofs: Proofs): TakingRow | null {
  const proof = proofOf(tender, taken, proofs);
  if (!taken && (proof.amountMinor === null || proof.amountMinor === 0)) return null;
  const gross = taken?.amountMinor ?? ZERO;
  const change = taken?.changeMinor ?? ZERO;
  const receiptsMinor = minor(gross - change);
  const count = taken?.count ?? 0;
  return {
    tender,
    receiptsMinor,
    receiptsWhy: {
      title: `${formatAmount(receiptsMinor, proofs.currency)} by ${TENDER_LABEL[tender].toLowerCase()}`,
      steps: [
        { label: `${count} ${count === 1 ? 'receipt' : 'receipts'}`, amountMinor: gross },
        ...(change === 0 ? [] : [{ label: 'Change given', amountMinor: minor(-change) }]),
        { label: 'Taken', amountMinor: receiptsMinor },
      ],
    },
    proofMinor: proof.amountMinor,
    by: proof.by,
  };
}

/** Where each tender's proof comes from: the tills, the machine's batch, the processor, or later the bank. */
function proofOf(
  tender: Tender,
  taken: Taken | undefined,
  proofs: Proofs,
): { amountMinor: Minor | null; by: string } {
  if (tender === 'cash') {
    const { tills } = proofs;
    if (tills.some((till) => till.differenceMinor === null))
      return { amountMinor: null, by: 'tills not counted yet' };
    const off = sum(tills.map((till) => till.differenceMinor ?? ZERO));
    const words = tills.length === 1 ? 'the till above' : `the ${tills.length} tills above`;
    return { amountMinor: minor((taken?.amountMinor ?? 0) - (taken?.changeMinor ?? 0) + off), by: words };
  }
  if (tender === 'card_machine') {
    const { batches } = proofs;
    if (batches.length === 0) return { amountMinor: null, by: 'batch not entered yet' };
    const slips = batches.reduce((total, batch) => total + batch.slips, 0);
    const names = batches.map((batch) => batch.batchNo).join(', ');
    return {
      amountMinor: sum(batches.map((batch) => batch.amountMinor)),
      by: `batch ${names}, ${slips} ${slips === 1 ? 'slip' : 'slips'}`,
    };
  }
  if (tender === 'online_card') {
    const { count, amountMinor, feeMinor } = proofs.online;
    const fees =
      feeMinor === 0 ? 'fees not told yet' : `fees ${formatAmount(feeMinor, proofs.currency)} to come off`;
    return { amountMinor, by: `${count} ${count === 1 ? 'payment' : 'payments'}, ${fees}` };
  }
  if (tender === 'credit') return { amountMinor: taken?.amountMinor ?? ZERO, by: 'credit used' };
  return { amountMinor: null, by: tender === 'lender' ? 'settles later' : 'shown by the bank later' };
}
