import { type CurrencyCode, formatAmount, type Minor } from '#domain/money/index';
import { formatDioptres, formatPower, formatPrescription } from '#domain/prescription/index';
import { type ClinicDate, formatDay } from '#domain/time/index';
import type { PricedCourse, QuoteLine } from './course.ts';

/** One line of a derivation: a label and a value kept as data, written out only where it is read. */
export interface Step {
  readonly label: string;
  readonly value: StepValue;
}

export type StepValue =
  | { readonly kind: 'text'; readonly text: string }
  | { readonly kind: 'money'; readonly amountMinor: Minor }
  | { readonly kind: 'rate'; readonly rateBp: number }
  | { readonly kind: 'power'; readonly powerMd: number }
  | { readonly kind: 'size'; readonly sizeMd: number }
  | {
      readonly kind: 'prescription';
      readonly sphereMd: number;
      readonly cylinderMd: number | null;
      readonly axisDeg: number | null;
    }
  | { readonly kind: 'day'; readonly on: ClinicDate }
  | { readonly kind: 'rule'; readonly line: number };

/** A derivation as the margin shows it. */
export interface Explanation {
  readonly title: string;
  readonly steps: readonly {
    readonly label: string;
    readonly text: string;
    readonly amountMinor?: Minor;
    readonly rule?: string;
    readonly version?: string;
  }[];
}

const COLUMN_NAMES = { OD: 'the right eye', OS: 'the left eye', OU: 'both eyes' } as const;

/** Writes out why a line is what it is, one text per step, the rule of the book last. */
export function explainLine(line: QuoteLine, course: PricedCourse): Explanation {
  const version = `${course.book.id} ${course.book.version}`;
  return {
    title: `${formatAmount(line.amountMinor, course.currency)} for ${COLUMN_NAMES[line.laterality]}`,
    steps: line.why.map(({ label, value }) => {
      if (value.kind === 'rule') {
        return {
          label: `Price book ${course.book.version}, line ${value.line}`,
          text: `since ${formatDay(course.book.inForceFrom)}`,
          rule: line.ruleId,
          version,
        };
      }
      const text = stepText(value, course.currency);
      return value.kind === 'money' ? { label, text, amountMinor: value.amountMinor } : { label, text };
    }),
  };
}

/** A step's value in words or figures. */
export function stepText(value: StepValue, currency: CurrencyCode): string {
  switch (value.kind) {
    case 'text':
      return value.text;
    case 'money':
      return formatAmount(value.amountMinor, currency);
    case 'rate':
      return formatRate(value.rateBp);
    case 'power':
      return `${formatPower(value.powerMd)} D`;
    case 'size':
      return `${formatDioptres(value.sizeMd)} D`;
    case 'prescription':
      return formatPrescription(value);
    case 'day':
      return formatDay(value.on);
    case 'rule':
      return `line ${value.line}`;
  }
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
