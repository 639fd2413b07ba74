/**
 * The stand-in's invented tariff; no real price list is meant.
 */

/** Fee of a card charge in minor units: 1.4 % and 25 more, the hundredth part rounded half up. */
export function chargeFee(amount: number): number {
  return Math.floor((amount * 14 + 500) / 1_000) + 25;
}

/** What a chargeback costs in minor units; it does not come back when the dispute is won. */
export const DISPUTE_FEE = 2_000;
