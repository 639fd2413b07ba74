import type { Laterality } from '#domain/eye';
import { add, type Minor, minor, sum, ZERO } from '#domain/money/index';
import type { WantedCourse } from './check-input.ts';
import type { ByColumn, PackageComparison } from './course.ts';
import { nameOf } from './lines.ts';
import { newPart, type Part, type Promised, type Reduction } from './part.ts';
import { collectParts, listed } from './parts.ts';
import type { Package } from './price-book.ts';
import {
  isCovered,
  reduceByDiscount,
  reduceByPackage,
  reduceByPriceList,
  reduceSecondEye,
} from './reductions.ts';
import { taxParts } from './taxes.ts';

/** Parts with everything taken off and taxed: the price before instalment charges. */
export interface PricedParts {
  readonly parts: readonly Part[];
  readonly reductions: readonly Reduction[];
  readonly promises: readonly Promised[];
  readonly totalMinor: Minor;
  /** How the price of a fixed package is shared out to the columns: weights. */
  readonly packageWeights: ByColumn | null;
}

/** Prices what is wanted; a package is held against its parts and gives way where they are no dearer. */
export function priceParts(wanted: WantedCourse): {
  readonly priced: PricedParts;
  readonly comparison: PackageComparison | null;
} {
  const chosen = wanted.package;
  const asParts = priceWith(wanted, null);
  if (!chosen) return { priced: asParts, comparison: null };
  const asPackage = priceWith(wanted, chosen);
  const chargedAsParts = !chosen.mayCostMore && asPackage.totalMinor > asParts.totalMinor;
  const priced = chargedAsParts ? asParts : asPackage;
  return {
    priced,
    comparison: {
      packageId: chosen.id,
      label: chosen.label,
      partsMinor: asParts.totalMinor,
      priceMinor: priced.totalMinor,
      savesMinor: minor(asParts.totalMinor - priced.totalMinor),
      chargedAsParts,
    },
  };
}

function priceWith(wanted: WantedCourse, chosen: Package | null): PricedParts {
  const all = collectParts(wanted);
  const promises: Promised[] = [];
  for (const part of all) if (part.promise) promises.push(part.promise);
  const fixed = chosen?.price.kind === 'amount' ? fixedPackage(wanted, chosen, all) : null;
  const parts = fixed && chosen ? [fixed].concat(all.filter((part) => !isCovered(part, chosen))) : all;
  const reductions: Reduction[] = [];
  if (!fixed) reduceSecondEye(wanted, parts, reductions);
  if (chosen) reduceByPackage(chosen, parts, reductions);
  reduceByPriceList(wanted, parts, reductions);
  for (const discount of wanted.discounts) reduceByDiscount(wanted, discount, parts, reductions);
  taxParts(wanted, parts);
  let totalMinor = ZERO;
  for (const part of parts) totalMinor = add(totalMinor, part.payableMinor);
  const packageWeights = fixed && chosen ? weightsOf(all.filter((part) => isCovered(part, chosen))) : null;
  return { parts, reductions, promises, totalMinor, packageWeights };
}

/** The one line of a package with a price of its own. */
function fixedPackage(wanted: WantedCourse, chosen: Package, all: readonly Part[]): Part | null {
  if (chosen.price.kind !== 'amount') return null;
  const amount = listed(wanted.priceList, chosen.id, chosen.price.amountMinor);
  const [only] = wanted.eyes;
  const covered = all.filter((part) => isCovered(part, chosen));
  const words = {
    row: `package:${chosen.id}`,
    kind: 'package',
    ruleId: chosen.id,
    label: chosen.label,
    detail: null,
  } as const;
  const why = covered.map((part) => ({ label: nameOf(part), amountMinor: part.grossMinor }));
  why.push({ label: 'Parts by themselves', amountMinor: sum(covered.map((part) => part.grossMinor)) });
  why.push({ label: 'Price of the package', amountMinor: amount });
  const laterality = chosen.eyes === 'one' && only ? only.eye : 'OU';
  return newPart(words, laterality, chosen.taxClassId, amount, null, why, true);
}

function weightsOf(covered: readonly Part[]): ByColumn {
  const of = (laterality: Laterality) => {
    const mine = covered.filter((part) => part.laterality === laterality);
    return sum(mine.map((part) => part.promise?.standAloneMinor ?? ZERO));
  };
  return { OD: of('OD'), OS: of('OS'), OU: of('OU') };
}
