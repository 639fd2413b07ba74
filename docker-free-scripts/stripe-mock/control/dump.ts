import type { BalanceOfCurrency } from '#stand-ins/stripe-mock/objects/balance';
import { balances } from '#stand-ins/stripe-mock/objects/balance';
import { checkBooks } from '#stand-ins/stripe-mock/objects/books';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { Collections, Kind, SettingsRecord } from '#stand-ins/stripe-mock/state/records';
import { KINDS } from '#stand-ins/stripe-mock/state/records';
import type { ClockReading } from './clock-control.ts';
import { readClock } from './clock-control.ts';

export interface Dump {
  readonly clock: ClockReading;
  readonly settings: Omit<SettingsRecord, 'webhookSecret'>;
  readonly balances: readonly BalanceOfCurrency[];
  /** What does not add up, in words; empty when all does. */
  readonly problems: readonly string[];
  readonly state: { readonly [K in Exclude<Kind, 'clock' | 'settings'>]: readonly Collections[K][] };
}

export function dump(service: Service): Dump {
  const { webhookSecret: _, ...settings } = service.store.get('settings', 'settings');
  const kinds = KINDS.filter((kind) => kind !== 'clock' && kind !== 'settings');
  return {
    clock: readClock(service),
    settings,
    balances: balances(service),
    problems: checkBooks(service),
    state: Object.fromEntries(
      kinds.map((kind) => [kind, service.store.all(kind)]),
    ) as unknown as Dump['state'],
  };
}
