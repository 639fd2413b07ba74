import type { Laterality } from '#domain/eye';
import { type Minor, minor, negate, splitByWeights, sum, ZERO } from '#domain/money/index';
import type { WantedCourse } from './check-input.ts';
import type { ByColumn, LineKind, PackageComparison, QuoteLine } from './course.ts';
import {
  collectParts,
  listed,
  moneyStep,
  type Part,
  type Promised,
  type Reduction,
  ruleStep,
  textStep,
} from './parts.ts';
import type { Package } from './price-book.ts';
import {
  discountReductions,
  isCovered,
  packageReductions,
  priceListReductions,
  secondEyeReductions,
} from './reductions.ts';
import { type TaxedPart, taxParts } from './taxes.ts';

/** Parts with everything taken off and taxed: the price before instalment charges. */
export interface PricedParts {
  readonly parts: readonly TaxedPart[];
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
  if (!chosen) return { priced: priceWith(wanted, null), comparison: null };
  const asParts = priceWith(wanted, null);
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
  const promises = all.flatMap((part) => part.promise ?? []);
  const fixed = chosen?.price.kind === 'amount' ? fixedPackage(wanted, chosen, all) : null;
  const parts = fixed && chosen ? [fixed, ...all.filter((part) => !isCovered(part, chosen))] : all;
  const reductions = fixed ? [] : secondEyeReductions(wanted, parts);
  if (chosen) reductions.push(...packageReductions(wanted, chosen, parts));
  reductions.push(...priceListReductions(wanted, parts));
  for (const discount of wanted.discounts) reductions.push(...discountReductions(wanted, discount, parts));
  const taxed = taxParts(wanted, parts);
  return {
    parts: taxed,
    reductions,
    promises,
    totalMinor: sum(taxed.map((part) => part.payableMinor)),
    packageWeights: fixed && chosen ? weightsOf(all.filter((part) => isCovered(part, chosen))) : null,
  };
}

/** The one line of a package with a price of its own. */
function fixedPackage(wanted: WantedCourse, chosen: Package, all: readonly Part[]): Part | null {
  if (chosen.price.kind !== 'amount') return null;
  const amount = listed(wanted.priceList, chosen.id, chosen.price.amountMinor);
  const [only] = wanted.eyes;
  const covered = all.filter((part) => isCovered(part, chosen));
  return {
    row: `package:${chosen.id}`,
    kind: 'package',
    ruleId: chosen.id,
    label: chosen.label,
    detail: null,
    laterality: chosen.eyes === 'one' && only ? only.eye : 'OU',
    taxClassId: chosen.taxClassId,
    isSurgery: true,
    grossMinor: amount,
    netMinor: amount,
    promise: null,
    why: [
      ...covered.map((part) => moneyStep(nameOf(part), part.grossMinor)),
      moneyStep('Parts by themselves', sum(covered.map((part) => part.grossMinor))),
      textStep('Package', chosen.label),
      ruleStep(wanted, chosen.id),
    ],
  };
}

function nameOf(part: Part): string {
  const side = part.laterality === 'OU' ? '' : part.laterality === 'OD' ? ', right' : ', left';
  return `${part.kind === 'procedure' ? (part.detail ?? part.label) : part.label}${side}`;
}

function weightsOf(covered: readonly Part[]): ByColumn {
  const of = (laterality: Laterality) =>
    sum(
      covered
        .filter((part) => part.laterality === laterality)
        .map((part) => part.promise?.standAloneMinor ?? ZERO),
    );
  return { OD: of('OD'), OS: of('OS'), OU: of('OU') };
}

/** Lines of the quote: parts, then what comes off them, then tax that is not in the prices. Nothing-lines are left out. */
export function linesOf(priced: PricedParts): QuoteLine[] {
  const lines: QuoteLine[] = [];
  for (const part of priced.parts) {
    if (part.grossMinor === 0 && part.kind !== 'procedure') continue;
    lines.push({
      id: `${part.row}:${part.laterality}`,
      row: part.row,
      kind: part.kind,
      ruleId: part.ruleId,
      label: part.label,
      detail: part.detail,
      laterality: part.laterality,
      amountMinor: part.grossMinor,
      taxClassId: part.taxClassId,
      why: part.why,
    });
  }
  return [...lines, ...reductionLines(priced.reductions)];
}

const ROWS: readonly LineKind[] = [
  'package',
  'procedure',
  'band',
  'add_on',
  'second_eye',
  'aftercare',
  'cover',
  'package_rate',
  'price_list',
  'discount',
  'instalment_charge',
  'tax',
];
const COLUMNS: readonly Laterality[] = ['OD', 'OS', 'OU'];

/** The order a quote is read in: by kind, then by the book's lines, then right eye, left eye, both. */
export function inReadingOrder(
  lines: readonly QuoteLine[],
  lineOf: ReadonlyMap<string, number>,
): QuoteLine[] {
  const place = (line: QuoteLine) => (line.kind === 'procedure' ? 0 : (lineOf.get(line.ruleId) ?? 0));
  return [...lines].sort(
    (a, b) =>
      ROWS.indexOf(a.kind) - ROWS.indexOf(b.kind) ||
      place(a) - place(b) ||
      COLUMNS.indexOf(a.laterality) - COLUMNS.indexOf(b.laterality),
  );
}

/** One line per reduction, column and tax class, with the parts it came off. */
function reductionLines(reductions: readonly Reduction[]): QuoteLine[] {
  const groups = new Map<string, Reduction[]>();
  for (const reduction of reductions) {
    if (reduction.offMinor === 0) continue;
    const { laterality, taxClassId } = reduction.part;
    const key = `${reduction.row}:${laterality}:${taxClassId}`;
    const group = groups.get(key);
    if (group) group.push(reduction);
    else groups.set(key, [reduction]);
  }
  return [...groups].flatMap(([id, group]) => {
    const [first] = group;
    if (!first) return [];
    const { row, kind, ruleId, label, detail, why, part } = first;
    const from = group.map((each) =>
      moneyStep(`${nameOf(each.part)}, ${plainly(each)}`, negate(each.offMinor)),
    );
    return [
      {
        id,
        row,
        kind,
        ruleId,
        label,
        detail,
        laterality: part.laterality,
        amountMinor: negate(sum(group.map((each) => each.offMinor))),
        taxClassId: part.taxClassId,
        why: kind === 'second_eye' ? why : [...why.slice(0, -1), ...from, ...why.slice(-1)],
      },
    ];
  });
}

function plainly(reduction: Reduction): string {
  return reduction.fromMinor === reduction.part.grossMinor ? 'its part' : 'its part of what was left';
}

/** What stands in each column, and the same with a package's price shared out by stand-alone prices. */
export function columnsOf(priced: PricedParts): { readonly columns: ByColumn; readonly shares: ByColumn } {
  const columns = { OD: 0, OS: 0, OU: 0 };
  let packaged = 0;
  for (const part of priced.parts) {
    columns[part.laterality] += part.payableMinor;
    if (part.kind === 'package' && part.laterality === 'OU') packaged += part.payableMinor;
  }
  const exact = { OD: minor(columns.OD), OS: minor(columns.OS), OU: minor(columns.OU) };
  if (packaged === 0 || !priced.packageWeights) return { columns: exact, shares: exact };
  const { OD, OS, OU } = priced.packageWeights;
  const [right = 0, left = 0, both = 0] = splitByWeights(minor(packaged), [OD, OS, OU]);
  return {
    columns: exact,
    shares: {
      OD: minor(exact.OD + right),
      OS: minor(exact.OS + left),
      OU: minor(exact.OU - packaged + both),
    },
  };
}
