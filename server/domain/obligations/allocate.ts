import { type Minor, minor, splitByWeights, subtract, sum } from '#domain/money/index';

/** Obligations that regularly sell together for less than one by one: the discount between them is theirs alone. */
export interface RegularBundle {
  /** Positions of its obligations. */
  readonly members: readonly number[];
  /** What the bundle regularly sells for. */
  readonly priceMinor: Minor;
}

export type Allocation =
  | { readonly ok: true; readonly allocated: readonly Minor[] }
  | { readonly ok: false; readonly why: 'residual_not_positive' | 'residual_too_small' };

/**
 * Allocates a transaction price by relative stand-alone selling price (IFRS 15.74–77, ASC 606-10-32-31 ff.),
 * largest remainder, ties to the earlier obligation.
 */
export function allocateByStandAlone(priceMinor: Minor, standAlone: readonly Minor[]): Minor[] {
  const nothing = standAlone.every((weight) => weight === 0);
  return splitByWeights(priceMinor, nothing ? standAlone.map(() => 1) : standAlone);
}

/**
 * Allocates a price where a bundle explains the whole discount: the members share what the bundle sells for, the
 * others keep their stand-alone price (IFRS 15.82). Where the bundle does not explain it exactly, the whole price is
 * allocated relatively, which is what 15.81 asks for.
 */
export function allocateWithBundle(
  priceMinor: Minor,
  standAlone: readonly Minor[],
  bundle: RegularBundle,
): Minor[] {
  const inside = new Set(bundle.members);
  const others = sum(standAlone.filter((_, index) => !inside.has(index)));
  if (subtract(priceMinor, others) !== bundle.priceMinor) return allocateByStandAlone(priceMinor, standAlone);
  const shares = splitByWeights(
    bundle.priceMinor,
    standAlone.map((weight, index) => (inside.has(index) ? weight : 0)),
  );
  return standAlone.map((weight, index) => (inside.has(index) ? (shares[index] ?? minor(0)) : weight));
}

/**
 * Allocates what is left to the last obligation, whose stand-alone price is not known (IFRS 15.79(c)), the others
 * keeping theirs (or a bundle's share). Refused when next to nothing would be left for it: then the residual does not
 * show a stand-alone price (15.79, IE 33 case C).
 *
 * @param observed the range its price has been seen in; a residual outside is refused
 */
export function allocateResidual(
  priceMinor: Minor,
  known: readonly Minor[],
  observed: { readonly leastMinor: Minor },
): Allocation {
  const residual = subtract(priceMinor, sum(known));
  if (residual <= 0) return { ok: false, why: 'residual_not_positive' };
  if (residual < observed.leastMinor) return { ok: false, why: 'residual_too_small' };
  return { ok: true, allocated: [...known, residual] };
}
