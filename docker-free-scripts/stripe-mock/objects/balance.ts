import type { Service } from '#stand-ins/stripe-mock/service';
import { stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type {
  BalanceTransactionRecord,
  BalanceTransactionType,
  ReportingCategory,
} from '#stand-ins/stripe-mock/state/records';

export interface Booking {
  readonly type: BalanceTransactionType;
  readonly reportingCategory: ReportingCategory;
  /** Signed: what comes in is positive. */
  readonly amount: number;
  readonly fee?: number;
  readonly feeDescription?: string;
  readonly currency: string;
  readonly source: string;
  readonly description?: string | null;
  /** Unix seconds; now unless given. */
  readonly availableOn?: number;
  readonly payoutId?: string;
}

/** Books one row of the balance. Rows are the only place money is kept: every balance is a sum over them. */
export function book(service: Service, booking: Booking): BalanceTransactionRecord {
  return service.store.put('balanceTransactions', {
    fee: 0,
    feeDescription: '',
    description: null,
    availableOn: service.clock.nowSeconds(),
    payoutId: null,
    ...booking,
    ...stamp(service, newId('txn')),
  });
}

export function netOf(row: BalanceTransactionRecord): number {
  return row.amount - row.fee;
}

export interface BalanceOfCurrency {
  readonly currency: string;
  readonly available: number;
  readonly pending: number;
}

/** What is available and what is still on its way, per currency; the house's own currency always appears. */
export function balances(service: Service): BalanceOfCurrency[] {
  const now = service.clock.nowSeconds();
  const sums = new Map([[service.currency, { available: 0, pending: 0 }]]);
  for (const row of service.store.all('balanceTransactions')) {
    const sum = sums.get(row.currency) ?? { available: 0, pending: 0 };
    sum[row.availableOn <= now ? 'available' : 'pending'] += netOf(row);
    sums.set(row.currency, sum);
  }
  return [...sums].map(([currency, sum]) => ({ currency, ...sum }));
}

export function availableBalance(service: Service, currency: string): number {
  return balances(service).find((balance) => balance.currency === currency)?.available ?? 0;
}
