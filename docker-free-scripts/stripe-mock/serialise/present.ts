import type { Service } from '#stand-ins/stripe-mock/service';
import type { Collections, JsonObject } from '#stand-ins/stripe-mock/state/records';
import { presentBalanceTransaction } from './balance-transaction.ts';
import { presentCard } from './card.ts';
import { presentCharge } from './charge.ts';
import { presentCustomer } from './customer.ts';
import { presentDispute } from './dispute.ts';
import { presentEvent } from './event.ts';
import { presentIntent } from './payment-intent.ts';
import { presentPayout } from './payout.ts';
import { presentRefund } from './refund.ts';
import { presentSession } from './session.ts';

/** How each kind of record looks to the outside; the shapes are typed by the official SDK's declarations. */
const PRESENTERS = {
  sessions: presentSession,
  intents: presentIntent,
  cards: presentCard,
  charges: presentCharge,
  refunds: presentRefund,
  disputes: presentDispute,
  balanceTransactions: presentBalanceTransaction,
  payouts: presentPayout,
  customers: presentCustomer,
  events: presentEvent,
} as const satisfies { [K in keyof Collections]?: (service: Service, record: Collections[K]) => object };

export type PublicKind = keyof typeof PRESENTERS;

/** The record as the published object, nothing expanded. */
export function present<K extends PublicKind>(service: Service, kind: K, record: Collections[K]): JsonObject {
  const presenter = PRESENTERS[kind] as (service: Service, record: Collections[K]) => object;
  return presenter(service, record) as JsonObject;
}

const KIND_BY_PREFIX: Readonly<Record<string, PublicKind>> = {
  cs: 'sessions',
  pi: 'intents',
  pm: 'cards',
  ch: 'charges',
  re: 'refunds',
  dp: 'disputes',
  txn: 'balanceTransactions',
  po: 'payouts',
  cus: 'customers',
  evt: 'events',
};

/** The object an id stands for, or undefined when it is no id of ours. */
export function presentById(service: Service, id: string): JsonObject | undefined {
  const kind = KIND_BY_PREFIX[id.slice(0, id.indexOf('_'))];
  const record = kind === undefined ? undefined : service.store.find(kind, id);
  return kind === undefined || record === undefined ? undefined : present(service, kind, record);
}
