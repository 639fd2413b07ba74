import type { Laterality } from '#domain/eye';
import { add, type Minor, minor, negate, splitByWeights } from '#domain/money/index';
import type { CompiledPriceBook } from './compile.ts';
import type { ByColumn, LineKind, QuoteLine } from './course.ts';
import type { Step } from './explain.ts';
import type { LineWords, Part, Reduction } from './part.ts';
import type { PricedParts } from './price-parts.ts';

/** A line while others may still add to it, with its place in the reading order. */
interface Draft {
  readonly place: number;
  readonly words: LineWords;
  readonly laterality: Laterality;
  readonly taxClassId: string | null;
  readonly why: Step[] | readonly Step[];
  amount: Minor;
}

const ROWS: Readonly<Record<LineKind, number>> = {
  package: 0,
  procedure: 1,
  band: 2,
  add_on: 3,
  second_eye: 4,
  aftercare: 5,
  cover: 6,
  package_rate: 7,
  price_list: 8,
  discount: 9,
  instalment_charge: 10,
  tax: 11,
};
const COLUMNS: Readonly<Record<Laterality, number>> = { OD: 0, OS: 1, OU: 2 };
const SIDES: Readonly<Record<Laterality, string>> = { OD: ', right', OS: ', left', OU: '' };

/**
 * Lines of the quote in the order it is read in: by kind, by the book's lines, then right eye, left eye, both.
 * Parts, what comes off them (one line per reason, column and tax class), then tax that is not in the prices.
 * Lines of nothing are left out, surgery excepted.
 */
export function linesOf(priced: PricedParts, compiled: CompiledPriceBook): QuoteLine[] {
  const drafts: Draft[] = [];
  for (const part of priced.parts) {
    if (part.grossMinor === 0 && part.words.kind !== 'procedure') continue;
    const { words, laterality, taxClassId, why, grossMinor } = part;
    drafts.push(draft(compiled, words, laterality, taxClassId, why, grossMinor));
  }
  draftReductions(drafts, priced.reductions, compiled);
  draftTaxes(drafts, priced.parts, compiled);
  drafts.sort((a, b) => a.place - b.place);
  return drafts.map((each, index) => lineOf(each, drafts[index - 1], compiled));
}

function draft(
  compiled: CompiledPriceBook,
  words: LineWords,
  laterality: Laterality,
  taxClassId: string | null,
  why: readonly Step[],
  amount: Minor,
): Draft {
  const line = words.kind === 'procedure' ? 0 : (compiled.lineOf.get(words.ruleId) ?? 0);
  const place = (ROWS[words.kind] * 1_000_000 + line) * 4 + COLUMNS[laterality];
  return { place, words, laterality, taxClassId, why, amount };
}

function lineOf(
  { words, laterality, taxClassId, why, amount }: Draft,
  before: Draft | undefined,
  compiled: CompiledPriceBook,
): QuoteLine {
  const again = before?.words.row === words.row && before.laterality === laterality;
  return {
    id: again ? `${words.row}:${laterality}:${taxClassId}` : `${words.row}:${laterality}`,
    row: words.row,
    kind: words.kind,
    ruleId: words.ruleId,
    ruleLine: compiled.lineOf.get(words.ruleId) ?? 0,
    label: words.label,
    detail: words.detail,
    laterality,
    amountMinor: amount,
    taxClassId,
    why,
  };
}

/** The name of a part in a derivation: "Lenticule extraction, right". */
export function nameOf(part: Part): string {
  const { kind, detail, label } = part.words;
  return (kind === 'procedure' && detail !== null ? detail : label) + SIDES[part.laterality];
}

/** Reductions of one reason follow one another, so only the drafts since its first need looking at. */
function draftReductions(
  drafts: Draft[],
  reductions: readonly Reduction[],
  compiled: CompiledPriceBook,
): void {
  let words: LineWords | null = null;
  let start = drafts.length;
  for (const { words: own, part, offMinor, why } of reductions) {
    if (offMinor === 0) continue;
    if (own !== words) {
      words = own;
      start = drafts.length;
    }
    const step: Step = { label: nameOf(part), amountMinor: negate(offMinor) };
    const open = drafts.find(
      (each, index) =>
        index >= start && each.laterality === part.laterality && each.taxClassId === part.taxClassId,
    );
    if (open) {
      open.amount = minor(open.amount - offMinor);
      (open.why as Step[]).push(step);
    } else {
      const amount = negate(offMinor);
      drafts.push(draft(compiled, own, part.laterality, part.taxClassId, why.concat(step), amount));
    }
  }
}

/** One line per class, rate and column for tax that the prices do not include. */
function draftTaxes(drafts: Draft[], parts: readonly Part[], compiled: CompiledPriceBook): void {
  const start = drafts.length;
  for (const part of parts) {
    if (part.taxMinor === 0) continue;
    const taxClass = compiled.taxClasses.get(part.taxClassId);
    if (taxClass?.stated !== 'excluded') continue;
    const row = `tax:${taxClass.id}:${part.rateBp}`;
    const step: Step = { label: nameOf(part), amountMinor: part.taxMinor };
    const open = drafts.find(
      (each, index) => index >= start && each.laterality === part.laterality && each.words.row === row,
    );
    if (open) {
      open.amount = add(open.amount, part.taxMinor);
      (open.why as Step[]).push(step);
    } else {
      const words = { row, kind: 'tax', ruleId: taxClass.id, label: taxClass.label, detail: null } as const;
      const why: Step[] = [{ label: 'Rate', rateBp: part.rateBp }, step];
      drafts.push(draft(compiled, words, part.laterality, null, why, part.taxMinor));
    }
  }
}

/** What stands in each column, and the same with a package's price shared out by stand-alone prices. */
export function columnsOf(priced: PricedParts): { readonly columns: ByColumn; readonly shares: ByColumn } {
  const columns = { OD: 0, OS: 0, OU: 0 };
  let packaged = 0;
  for (const part of priced.parts) {
    columns[part.laterality] += part.payableMinor;
    if (part.words.kind === 'package' && part.laterality === 'OU') packaged += part.payableMinor;
  }
  const exact = { OD: minor(columns.OD), OS: minor(columns.OS), OU: minor(columns.OU) };
  if (packaged === 0 || !priced.packageWeights) return { columns: exact, shares: exact };
  const { OD, OS, OU } = priced.packageWeights;
  const weights = OD + OS + OU === 0 ? [1, 1, 0] : [OD, OS, OU];
  const [right = 0, left = 0, both = 0] = splitByWeights(minor(packaged), weights);
  const shares = {
    OD: minor(exact.OD + right),
    OS: minor(exact.OS + left),
    OU: minor(exact.OU - packaged + both),
  };
  return { columns: exact, shares };
}
