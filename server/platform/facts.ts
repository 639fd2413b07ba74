import type { Trx } from './db.ts';

/**
 * The vocabulary of facts. A feature that publishes adds its facts by module augmentation, beside the use case that
 * publishes them: `declare module '#server/platform/facts' { interface FactMap { 'receipt.recorded': … } }`.
 */
// biome-ignore lint/suspicious/noEmptyInterface: filled by the features that publish
export interface FactMap {}

export type FactName = keyof FactMap & string;

/** Takes part in the transaction in which the fact happened; throwing undoes both. */
export type FactSubscriber<Name extends FactName> = (trx: Trx, fact: FactMap[Name]) => Promise<void>;

/** How effects travel to the right of the feature order without the left knowing the right. */
export interface Facts {
  publish<Name extends FactName>(trx: Trx, name: Name, fact: FactMap[Name]): Promise<void>;
  subscribe<Name extends FactName>(name: Name, subscriber: FactSubscriber<Name>): void;
}

/** Makes an empty board; the composition root subscribes. Subscribers run one after another, in order. */
export function createFacts(): Facts {
  const subscribers = new Map<string, FactSubscriber<never>[]>();
  return {
    async publish(trx, name, fact) {
      for (const subscriber of subscribers.get(name) ?? []) await subscriber(trx, fact as never);
    },
    subscribe(name, subscriber) {
      subscribers.set(name, [...(subscribers.get(name) ?? []), subscriber as FactSubscriber<never>]);
    },
  };
}
