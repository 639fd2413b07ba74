import type { Minor } from '#domain/money/index';

/** Where a figure comes from, as the margin beside it shows: rules and numbers in the order they were applied. */
export interface Derivation {
  readonly title: string;
  readonly steps: readonly DerivationStep[];
  readonly note?: string;
}

/** One line of a derivation: a label with an amount in minor units, or with words, and the rule it follows. */
export interface DerivationStep {
  readonly label: string;
  readonly amountMinor?: Minor;
  readonly text?: string;
  readonly rule?: string;
  readonly version?: string;
}
