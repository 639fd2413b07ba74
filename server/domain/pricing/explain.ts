import type { Derivation, DerivationStep } from '#domain/derivation';
import { formatAmount, type Minor } from '#domain/money/index';
import { formatDioptres, formatPower, formatPrescription } from '#domain/prescription/index';
import { formatDay } from '#domain/time/index';
import type { PricedCourse, QuoteLine } from './course.ts';

/** One line of a derivation: a label and a value kept as data, written out only where it is read. */
export type Step =
  | { readonly label: string; readonly text: string }
  | { readonly label: string; readonly amountMinor: Minor }
  | { readonly label: string; readonly rateBp: number }
  | { readonly label: string; readonly powerMd: number }
  | { readonly label: string; readonly sizeMd: number }
  | {
      readonly label: string;
      readonly sphereMd: number;
      readonly cylinderMd: number | null;
      readonly axisDeg: number | null;
    };

const COLUMN_NAMES = { OD: 'the right eye', OS: 'the left eye', OU: 'both eyes' } as const;

/** Why a line is what it is, as the margin shows it: one text per step, the rule of the book last. */
export function explainLine(line: QuoteLine, course: PricedCourse): Derivation {
  const { book, currency } = course;
  const steps = line.why.map((step): DerivationStep => {
    if ('amountMinor' in step) return step;
    return { label: step.label, text: stepText(step) };
  });
  const rule: DerivationStep = {
    label: `Price book ${book.version}, line ${line.ruleLine}`,
    text: `since ${formatDay(book.inForceFrom)}`,
    rule: line.ruleId,
    version: `${book.id} ${book.version}`,
  };
  return {
    title: `${formatAmount(line.amountMinor, currency)} for ${COLUMN_NAMES[line.laterality]}`,
    steps: [...steps, rule],
  };
}

function stepText(step: Exclude<Step, { amountMinor: Minor }>): string {
  if ('text' in step) return step.text;
  if ('rateBp' in step) return formatRate(step.rateBp);
  if ('powerMd' in step) return `${formatPower(step.powerMd)} D`;
  if ('sizeMd' in step) return `${formatDioptres(step.sizeMd)} D`;
  return formatPrescription(step);
}

/** Basis points as people write a rate: "10 %", "4.5 %", "9.69 %". */
export function formatRate(rateBp: number): string {
  const size = Math.abs(rateBp);
  const hundredths = String(size % 100)
    .padStart(2, '0')
    .replace(/0+$/, '');
  const whole = `${rateBp < 0 ? '\u2212' : ''}${Math.trunc(size / 100)}`;
  return `${hundredths === '' ? whole : `${whole}.${hundredths}`}\u00a0%`;
}

/** "on the day of surgery", "a week before surgery", "10 days before surgery". */
export function daysBeforeWords(days: number): string {
  if (days === 0) return 'on the day of surgery';
  if (days === 1) return 'the day before surgery';
  if (days === 7) return 'a week before surgery';
  return days % 7 === 0 ? `${days / 7} weeks before surgery` : `${days} days before surgery`;
}
