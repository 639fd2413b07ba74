import type { Derivation } from '#domain/derivation';
import { formatAmount, type Minor, negate } from '#domain/money/index';
import { type CancellationRow, type Due, formatRate, type PricedCourse } from '#domain/pricing/index';
import { formatDay } from '#domain/time/index';

type Column = 'OD' | 'OS' | 'OU';

const COLUMN_WORDS: Readonly<Record<Column, string>> = {
  OD: 'the right eye',
  OS: 'the left eye',
  OU: 'both eyes together',
};

/** What stands in one column of the table. */
export function columnWhy(course: PricedCourse, column: Column): Derivation {
  const lines = course.lines.filter((line) => line.laterality === column);
  return {
    title: `${formatAmount(course.columns[column], course.currency)} for ${COLUMN_WORDS[column]}`,
    steps: [
      ...lines.map((line) => ({ label: line.label, amountMinor: line.amountMinor })),
      { label: 'Together', amountMinor: course.columns[column] },
    ],
  };
}

/** How the columns come to the total, and the tax in it. */
export function totalWhy(course: PricedCourse): Derivation {
  const columns = (['OD', 'OS', 'OU'] as const).filter((column) =>
    course.lines.some((line) => line.laterality === column),
  );
  const taxes = course.taxes.map((tax) => ({
    label: tax.treatment === 'exempt' ? tax.label : `${tax.label}, ${formatRate(tax.rateBp)} in it`,
    amountMinor: tax.treatment === 'exempt' ? tax.grossMinor : tax.taxMinor,
    ...(tax.exemptionReason === null ? {} : { text: tax.exemptionReason }),
  }));
  return {
    title: `${formatAmount(course.totalMinor, course.currency)} to pay`,
    steps: [
      ...taxes,
      ...columns.map((column) => ({
        label: COLUMN_WORDS[column].replace(/^./, (letter) => letter.toUpperCase()),
        amountMinor: course.columns[column],
      })),
      { label: 'To pay', amountMinor: course.totalMinor },
    ],
    note: `Price book ${course.book.version}, in force since ${formatDay(course.book.inForceFrom)}.`,
  };
}

/** Where a sum that falls due comes from. */
export function dueWhy(due: Due, course: PricedCourse): Derivation {
  const others = course.schedule
    .filter((each) => each.id !== due.id)
    .map((each) => ({ label: each.label, text: each.detail, amountMinor: negate(each.amountMinor) }));
  return {
    title: `${formatAmount(due.amountMinor, course.currency)}, ${due.label.toLowerCase()}`,
    steps:
      due.kind === 'deposit'
        ? [
            { label: 'To pay altogether', amountMinor: course.totalMinor },
            { label: 'Rule', text: due.detail },
            { label: due.label, amountMinor: due.amountMinor },
          ]
        : [
            { label: 'To pay altogether', amountMinor: course.totalMinor },
            ...others,
            { label: due.label, text: due.detail, amountMinor: due.amountMinor },
          ],
    ...(due.dueOn === null ? { note: 'No day yet: it follows from the day of surgery.' } : {}),
  };
}

/** What would come back, and what would be kept, if plans change. */
export function cancellationWhy(row: CancellationRow, comesBack: Minor, course: PricedCourse): Derivation {
  return {
    title: `${formatAmount(comesBack, course.currency)} comes back`,
    steps: [
      ...(row.paidMinor === null ? [] : [{ label: 'Asked for by then', amountMinor: row.paidMinor }]),
      { label: `${row.label}, ${row.detail}`, amountMinor: negate(row.keptMinor) },
      { label: 'Comes back', amountMinor: comesBack },
    ],
    note: 'By the ladder of the price book, as the patient reads it on the quote.',
  };
}
