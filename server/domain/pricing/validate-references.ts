import { ruleIds } from './compile.ts';
import type { Find } from './finding.ts';
import type { PriceBook, Scope } from './price-book.ts';

/** Ids that stand twice, and names of rules the book does not have. */
export function validateReferences(book: PriceBook, find: Find): void {
  const ids = ruleIds(book);
  const seen = new Set<string>();
  for (const id of ids) {
    if (seen.has(id))
      find('duplicate_id', '', id, `Two rules have the id "${id}".`, 'Give one of them another id.');
    seen.add(id);
  }
  for (const [field, ruleId, what, id] of references(book)) {
    if (id === null || sections(book)[what].some((rule) => rule.id === id)) continue;
    find(
      'unknown_reference',
      field,
      ruleId,
      `"${ruleId}" names the ${WHAT[what]} "${id}", which the book does not have.`,
      'Choose one of the book, or add it.',
    );
  }
  for (const [index, list] of book.priceLists.entries()) {
    const prices = list.rule.kind === 'prices' ? Object.keys(list.rule.prices) : [];
    checkNamed(prices, `priceLists.${index}.rule.prices`, list.id);
    checkNamed(
      scoped(list.rule.kind === 'rate' ? list.rule.scope : 'everything'),
      `priceLists.${index}.rule`,
      list.id,
    );
  }
  for (const [index, { id, off }] of book.discounts.entries()) {
    checkNamed(scoped(off.kind === 'rate' ? off.scope : 'surgery'), `discounts.${index}.off.scope`, id);
  }

  function checkNamed(named: readonly string[], field: string, ruleId: string): void {
    for (const id of named) {
      if (seen.has(id)) continue;
      const words = `"${ruleId}" names the rule "${id}", which the book does not have.`;
      find('unknown_reference', field, ruleId, words, 'Choose a rule of the book.');
    }
  }
}

function scoped(scope: Scope): readonly string[] {
  return typeof scope === 'string' ? [] : scope.ruleIds;
}

const WHAT = {
  taxClasses: 'tax class',
  procedures: 'procedure',
  followUps: 'follow-up schedule',
  covers: 'enhancement cover',
  addOns: 'add-on',
} as const;
type Section = keyof typeof WHAT;

function sections(book: PriceBook): Readonly<Record<Section, readonly { readonly id: string }[]>> {
  return book;
}

type Reference = readonly [field: string, ruleId: string, what: Section, id: string | null];

function references(book: PriceBook): Reference[] {
  const found: Reference[] = [];
  for (const section of ['procedures', 'followUps', 'covers', 'addOns', 'packages'] as const) {
    for (const [index, rule] of book[section].entries()) {
      found.push([`${section}.${index}.taxClassId`, rule.id, 'taxClasses', rule.taxClassId]);
    }
  }
  for (const [index, { id, followUpId }] of book.procedures.entries()) {
    found.push([`procedures.${index}.followUpId`, id, 'followUps', followUpId]);
  }
  for (const [index, { id, procedureIds, requiresAddOnIds }] of book.bands.entries()) {
    for (const each of procedureIds) found.push([`bands.${index}.procedureIds`, id, 'procedures', each]);
    for (const each of requiresAddOnIds) found.push([`bands.${index}.requiresAddOnIds`, id, 'addOns', each]);
  }
  return found.concat(offerReferences(book));
}

function offerReferences(book: PriceBook): Reference[] {
  const found: Reference[] = [];
  for (const [index, { id, procedureIds }] of book.secondEye.entries()) {
    for (const each of procedureIds) found.push([`secondEye.${index}.procedureIds`, id, 'procedures', each]);
  }
  for (const [index, { id, procedureIds, includes }] of book.packages.entries()) {
    for (const each of procedureIds) found.push([`packages.${index}.procedureIds`, id, 'procedures', each]);
    for (const each of includes.addOnIds)
      found.push([`packages.${index}.includes.addOnIds`, id, 'addOns', each]);
    found.push([`packages.${index}.includes.coverId`, id, 'covers', includes.coverId]);
  }
  for (const [index, { id, aftercare }] of book.discounts.entries()) {
    found.push([`discounts.${index}.aftercare.followUpId`, id, 'followUps', aftercare?.followUpId ?? null]);
    found.push([`discounts.${index}.aftercare.coverId`, id, 'covers', aftercare?.coverId ?? null]);
  }
  for (const [index, plan] of book.paymentPlans.entries()) {
    const taxClassId = plan.kind === 'fee_bearing' ? plan.taxClassId : null;
    found.push([`paymentPlans.${index}.taxClassId`, plan.id, 'taxClasses', taxClassId]);
  }
  return found;
}
