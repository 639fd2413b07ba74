import { canonicalJson } from './canonical-json.ts';
import type { PriceBook } from './price-book.ts';

/** One rule that two books do not have alike. */
export interface BookChange {
  readonly change: 'added' | 'removed' | 'changed';
  readonly section: keyof PriceBook;
  /** null for the settings that are not rules (validity, balance due, …). */
  readonly ruleId: string | null;
  readonly label: string;
  readonly fields: readonly FieldChange[];
}

/** One member of a rule before and after: JSON values, undefined where it is not there. */
export interface FieldChange {
  /** Path within the rule, such as "charge.amountMinor". */
  readonly path: string;
  readonly before: unknown;
  readonly after: unknown;
}

const SECTIONS = [
  'taxClasses',
  'procedures',
  'bands',
  'secondEye',
  'followUps',
  'covers',
  'addOns',
  'packages',
  'priceLists',
  'discounts',
  'paymentPlans',
] as const satisfies readonly (keyof PriceBook)[];

const SETTINGS = [
  'inForceFrom',
  'currency',
  'deposit',
  'balanceDueDays',
  'cancellation',
  'validityDays',
  'allocationPolicy',
  'notIncluded',
] as const satisfies readonly (keyof PriceBook)[];

interface Rule {
  readonly id: string;
  readonly label?: string;
  readonly reason?: string;
}

/** What b changes against a, section by section: rules by id, then the settings. */
export function diffPriceBooks(a: PriceBook, b: PriceBook): BookChange[] {
  const rules = SECTIONS.flatMap((section) => diffRules(section, a[section], b[section]));
  const settings = SETTINGS.flatMap((section): BookChange[] => {
    const fields = diffValues('', a[section], b[section]);
    return fields.length === 0 ? [] : [{ change: 'changed', section, ruleId: null, label: section, fields }];
  });
  return [...rules, ...settings];
}

function diffRules(section: keyof PriceBook, before: readonly Rule[], after: readonly Rule[]): BookChange[] {
  const old = new Map(before.map((rule) => [rule.id, rule]));
  const kept = new Set(after.map((rule) => rule.id));
  const changes = after.flatMap((rule): BookChange[] => {
    const was = old.get(rule.id);
    const fields = diffValues('', was, rule);
    if (fields.length === 0) return [];
    return [
      {
        change: was ? 'changed' : 'added',
        section,
        ruleId: rule.id,
        label: nameOf(rule),
        fields: was ? fields : [],
      },
    ];
  });
  const removed = before
    .filter((rule) => !kept.has(rule.id))
    .map(
      (rule): BookChange => ({
        change: 'removed',
        section,
        ruleId: rule.id,
        label: nameOf(rule),
        fields: [],
      }),
    );
  return [...changes, ...removed];
}

function nameOf(rule: Rule): string {
  return rule.label ?? rule.reason ?? rule.id;
}

function diffValues(path: string, before: unknown, after: unknown): FieldChange[] {
  if (isRecord(before) && isRecord(after)) {
    const keys = [...new Set([...Object.keys(before), ...Object.keys(after)])].sort();
    return keys.flatMap((key) => diffValues(path === '' ? key : `${path}.${key}`, before[key], after[key]));
  }
  const same =
    before === undefined || after === undefined
      ? before === after
      : canonicalJson(before) === canonicalJson(after);
  return same ? [] : [{ path, before, after }];
}

function isRecord(value: unknown): value is Readonly<Record<string, unknown>> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
