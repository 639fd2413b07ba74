import { formatAmount, type Minor, sum, ZERO } from '#domain/money/index';
import { pairKey } from './compile.ts';
import type { BookFinding, Find } from './finding.ts';
import type { Charge, PriceBook } from './price-book.ts';
import { rateOn } from './taxes.ts';
import { validateBands } from './validate-bands.ts';
import { validateFigures } from './validate-figures.ts';
import { validateReferences } from './validate-references.ts';

/** Everything wrong with a draft, each finding saying what to change. A book in force has no errors. */
export function validatePriceBook(book: PriceBook): BookFinding[] {
  const findings: BookFinding[] = [];
  const find: Find = (code, field, ruleId, words, change, severity = 'error') =>
    findings.push({ severity, code, field, ruleId, words, change });
  if (book.procedures.length === 0) {
    const words = 'The book has no procedure, so nothing can be quoted.';
    find('no_procedure', 'procedures', null, words, 'Add a procedure with its price.');
  }
  validateFigures(book, find);
  validateReferences(book, find);
  validateBands(book, find);
  validateSecondEye(book, find);
  validateCovers(book, find);
  validateTaxes(book, find);
  validateAddOns(book, find);
  validatePackages(book, find);
  validateLimits(book, find);
  validateLadder(book, find);
  return findings;
}

function validateSecondEye(book: PriceBook, find: Find): void {
  const pairs = new Map<string, string>();
  for (const [index, rule] of book.secondEye.entries()) {
    const field = `secondEye.${index}`;
    const key = pairKey(...rule.procedureIds);
    if (pairs.has(key)) {
      const words = `"${rule.label}" and "${pairs.get(key)}" are for the same two procedures.`;
      find('second_eye_twice', field, rule.id, words, 'Keep one of the two.');
    }
    pairs.set(key, rule.label);
    if (rule.ifNever === null) {
      const words = `"${rule.label}" does not say what happens if the second eye never does.`;
      find(
        'second_eye_without_fallback',
        `${field}.ifNever`,
        rule.id,
        words,
        'Say that the first eye keeps its price, or what is added.',
      );
    }
    if (rule.sameSession === null && rule.staged === null) {
      const words = `"${rule.label}" takes nothing off, neither on one day nor later.`;
      find('second_eye_without_reduction', field, rule.id, words, 'Give a reduction, or delete the rule.');
    }
  }
  if (pairs.size === 0) return;
  for (const [index, first] of book.procedures.entries()) {
    for (const second of book.procedures.slice(index)) {
      if (pairs.has(pairKey(first.id, second.id))) continue;
      const words = `There is no second-eye rule for ${first.label} and ${second.label}.`;
      find(
        'second_eye_missing',
        'secondEye',
        null,
        words,
        'Add one, or leave both eyes at their price.',
        'notice',
      );
    }
  }
}

function validateCovers(book: PriceBook, find: Find): void {
  for (const [index, cover] of book.covers.entries()) {
    if (cover.priceOutOfCoverMinor === null) {
      const words = `"${cover.label}" has no price for an enhancement after it ends.`;
      find(
        'cover_without_price_after',
        `covers.${index}.priceOutOfCoverMinor`,
        cover.id,
        words,
        'Give the price out of cover.',
      );
    }
    if (cover.earliestMonth >= cover.months) {
      const words = `"${cover.label}" ends in month ${cover.months} and begins in month ${cover.earliestMonth}.`;
      find('cover_months', `covers.${index}.earliestMonth`, cover.id, words, 'Let it begin before it ends.');
    }
  }
}

function validateTaxes(book: PriceBook, find: Find): void {
  for (const [index, tax] of book.taxClasses.entries()) {
    const field = `taxClasses.${index}`;
    if (tax.treatment === 'exempt') {
      if ((tax.exemptionReason ?? '').trim() === '') {
        const words = `"${tax.label}" is exempt without a reason.`;
        find(
          'exempt_without_reason',
          `${field}.exemptionReason`,
          tax.id,
          words,
          'Give the reason that documents print.',
        );
      }
      continue;
    }
    if (rateOn(tax, book.inForceFrom) === null) {
      const words = `"${tax.label}" has no rate on the day the book comes into force.`;
      find('tax_without_rate', `${field}.rates`, tax.id, words, 'Add the rate with the day it holds from.');
    }
    if (new Set(tax.rates.map((rate) => rate.from)).size < tax.rates.length) {
      const words = `"${tax.label}" has two rates from the same day.`;
      find('tax_rate_twice', `${field}.rates`, tax.id, words, 'Keep one of the two.');
    }
  }
}

function validateAddOns(book: PriceBook, find: Find): void {
  const required = new Set(book.bands.flatMap((band) => band.requiresAddOnIds));
  for (const [index, addOn] of book.addOns.entries()) {
    if (addOn.per === 'eye' || (addOn.purpose !== 'surgery' && !required.has(addOn.id))) continue;
    const words =
      addOn.purpose === 'surgery'
        ? `"${addOn.label}" belongs to the surgery of an eye but is priced per ${addOn.per}.`
        : `"${addOn.label}" is required by a band, which belongs to an eye, but is priced per ${addOn.per}.`;
    find('add_on_not_per_eye', `addOns.${index}.per`, addOn.id, words, 'Price it per eye.');
  }
}

/** A fixed price is held against its parts with the cheapest procedures, without second-eye reductions. */
function validatePackages(book: PriceBook, find: Find): void {
  for (const [index, each] of book.packages.entries()) {
    if (each.price.kind !== 'amount' || each.mayCostMore) continue;
    const eyes = each.eyes === 'both' ? 2 : 1;
    const procedures = book.procedures.filter(({ id }) => each.procedureIds.includes(id));
    const cheapest = Math.min(...procedures.map(({ priceMinor }) => priceMinor));
    const visits = book.followUps.filter(({ id }) => procedures.some(({ followUpId }) => followUpId === id));
    const extras = book.addOns.filter(({ id }) => each.includes.addOnIds.includes(id));
    const cover = book.covers.find(({ id }) => id === each.includes.coverId);
    const parts =
      cheapest * eyes +
      (each.includes.aftercare && visits.length > 0
        ? Math.min(...visits.map((visit) => visit.priceMinor))
        : 0) +
      sum(extras.map(({ priceMinor }) => priceMinor)) +
      (cover?.priceMinor ?? ZERO) * eyes;
    if (procedures.length === 0 || each.price.amountMinor < parts) continue;
    const price = formatAmount(each.price.amountMinor, book.currency);
    const words = `"${each.label}" at ${price} saves nothing with the cheapest of its procedures.`;
    const change = 'Lower it, or take the procedure out; its parts are charged where they are cheaper.';
    find('package_without_saving', `packages.${index}.price`, each.id, words, change, 'notice');
  }
}

function validateLimits(book: PriceBook, find: Find): void {
  for (const [index, { id, reason, off }] of book.discounts.entries()) {
    const [own, approver] =
      off.kind === 'rate'
        ? [off.ownLimitBp, off.approverLimitBp]
        : [off.ownLimitMinor, off.approverLimitMinor];
    if (own <= approver) continue;
    const words = `"${reason}" lets a counsellor give more than the approver.`;
    find('limits_reversed', `discounts.${index}.off`, id, words, 'Let the approver’s limit be the larger.');
  }
  const { floorMinor, ceilingMinor, id } = book.deposit;
  if (floorMinor !== null && ceilingMinor !== null && floorMinor > ceilingMinor) {
    const words = 'The deposit’s floor lies over its ceiling.';
    find('deposit_limits_reversed', 'deposit.floorMinor', id, words, 'Let the ceiling be the larger.');
  }
}

function validateLadder({ cancellation }: PriceBook, find: Find): void {
  const { id, rungs } = cancellation;
  for (const [index, rung] of rungs.entries()) {
    const above = rungs[index - 1];
    if (!above) continue;
    const field = `cancellation.rungs.${index}`;
    if (rung.minDaysBefore >= above.minDaysBefore) {
      const words = `${rung.minDaysBefore} days stand below ${above.minDaysBefore} days.`;
      find('ladder_order', `${field}.minDaysBefore`, id, words, 'Order the rungs from the most days down.');
    }
    if (keepsLess(rung.kept, above.kept)) {
      const words = 'Less is kept although the surgery is nearer.';
      find('ladder_kept_falls', `${field}.kept`, id, words, 'Check the two rungs.', 'notice');
    }
  }
  const last = rungs.at(-1);
  if (last && last.minDaysBefore <= 1) return;
  const words = 'The ladder does not say what is kept until the day before surgery.';
  find('ladder_end', 'cancellation.rungs', id, words, 'Add a rung for one day before.');
}

function keepsLess(a: Charge, b: Charge): boolean {
  const size = (charge: Charge): number | Minor =>
    charge.kind === 'amount' ? charge.amountMinor : charge.rateBp;
  return a.kind === b.kind && size(a) < size(b);
}
