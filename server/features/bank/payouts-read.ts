import type { PayoutLineView, PayoutView } from '#contract/bank';
import { ACCOUNT } from '#domain/ledger/index';
import { type CurrencyCode, formatAmount, minor, negate, sum } from '#domain/money/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { type Db, rawRows, readMinor } from '#server/platform/db';

interface PayoutRow {
  payout_id: number;
  currency: CurrencyCode;
  amount_minor: number;
  created_on: ClinicDate;
  arrives_on: ClinicDate;
  state: PayoutView['state'];
  tied_at: Instant | null;
  gross: unknown;
  fee: unknown;
  net: unknown;
  movements: number;
}

const PAYOUTS = `
  SELECT p.payout_id, p.currency, p.amount_minor, p.created_on, p.arrives_on, p.state, p.tied_at,
         SUM(b.amount_minor) AS gross, SUM(b.fee_minor) AS fee, SUM(b.net_minor) AS net, COUNT(b.balance_transaction_id) AS movements
  FROM payouts p LEFT JOIN balance_transactions b ON b.payout_id = p.payout_id AND b.category <> 'payout'`;

const BY_PAYOUT =
  'GROUP BY p.payout_id, p.currency, p.amount_minor, p.created_on, p.arrives_on, p.state, p.tied_at';

function asPayout(row: PayoutRow): PayoutView {
  const amountMinor = readMinor(row.amount_minor);
  const movementsMinor = readMinor(row.net);
  return {
    payoutId: row.payout_id,
    amountMinor,
    currency: row.currency,
    createdOn: row.created_on,
    arrivesOn: row.arrives_on,
    state: row.state,
    tied: row.tied_at !== null,
    movementsMinor,
    differenceMinor: minor(row.tied_at === null ? 0 : amountMinor - movementsMinor),
    why: {
      title: `${formatAmount(amountMinor, row.currency)} paid out`,
      steps: [
        { label: `${row.movements} movements, gross`, amountMinor: readMinor(row.gross) },
        { label: 'Card fees', amountMinor: negate(readMinor(row.fee)) },
        { label: 'Paid out', amountMinor: movementsMinor },
      ],
    },
  };
}

/** Every payout, newest first. The processor pays the clinic, not a site: any site's desk and manager see them. */
export async function readPayouts(db: Db): Promise<PayoutView[]> {
  return (
    await rawRows<PayoutRow>(db, `${PAYOUTS} ${BY_PAYOUT} ORDER BY p.arrives_on DESC, p.payout_id DESC`)
  ).map(asPayout);
}

/** One payout, undefined when there is none. */
export async function readPayout(db: Db, payoutId: number): Promise<PayoutView | undefined> {
  const [row] = await rawRows<PayoutRow>(db, `${PAYOUTS} WHERE p.payout_id = ? ${BY_PAYOUT}`, [payoutId]);
  return row ? asPayout(row) : undefined;
}

/** The movements of a payout, or with null those that no payout has taken up yet. */
export async function readPayoutLines(db: Db, payoutId: number | null): Promise<PayoutLineView[]> {
  const rows = await rawRows<{
    balance_transaction_id: number;
    category: string;
    happened_on: ClinicDate;
    amount_minor: number;
    fee_minor: number;
    net_minor: number;
    receipt_id: number | null;
    number: string | null;
    payer_name: string | null;
  }>(
    db,
    `SELECT b.balance_transaction_id, b.category, b.happened_on, b.amount_minor, b.fee_minor, b.net_minor,
            r.receipt_id, r.number, r.payer_name
     FROM balance_transactions b LEFT JOIN receipts r ON r.receipt_id = b.receipt_id
     WHERE ${payoutId === null ? 'b.payout_id IS NULL' : 'b.payout_id = ?'} AND b.category <> 'payout'
     ORDER BY b.happened_on, b.balance_transaction_id`,
    payoutId === null ? [] : [payoutId],
  );
  return rows.map((row) => ({
    balanceTransactionId: row.balance_transaction_id,
    category: row.category,
    happenedOn: row.happened_on,
    grossMinor: readMinor(row.amount_minor),
    feeMinor: readMinor(row.fee_minor),
    netMinor: readMinor(row.net_minor),
    receiptId: row.receipt_id,
    receiptNumber: row.number,
    payerName: row.payer_name,
  }));
}

/** What waits at the processor by its own movements, and what our ledger says of it. */
export async function readClearing(db: Db): Promise<{
  waiting: PayoutLineView[];
  waitingMinor: ReturnType<typeof readMinor>;
  onlineClearingMinor: ReturnType<typeof readMinor>;
}> {
  const waiting = await readPayoutLines(db, null);
  const [row] = await rawRows<{ total: unknown }>(
    db,
    'SELECT SUM(amount_minor) AS total FROM journal_lines WHERE account_code = ?',
    [ACCOUNT.onlineClearing],
  );
  return {
    waiting,
    waitingMinor: sum(waiting.map((line) => line.netMinor)),
    onlineClearingMinor: readMinor(row?.total),
  };
}
