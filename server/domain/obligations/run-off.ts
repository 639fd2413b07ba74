import { add, type Minor, ZERO } from '#domain/money/index';
import { addMonths, type ClinicDate, firstOfMonth } from '#domain/time/index';

/** A promise still to be kept, and when it is expected to be: the day of surgery, a visit's, the end of a cover. */
export interface OpenPromise {
  readonly amountMinor: Minor;
  readonly expectedOn: ClinicDate | null;
}

/** When deferred income is expected to be earned. The parts add up to everything that is deferred. */
export interface RunOff {
  /** Expected before the first month and not kept: somebody should look. */
  readonly overdueMinor: Minor;
  readonly months: readonly { readonly month: ClinicDate; readonly amountMinor: Minor }[];
  readonly laterMinor: Minor;
  /** No day agreed. */
  readonly undatedMinor: Minor;
  readonly totalMinor: Minor;
}

/** Spreads what is deferred over the months it is expected to be earned in; `month` is a month's first day. */
export function runOff(promises: readonly OpenPromise[], from: ClinicDate, months: number): RunOff {
  const first = firstOfMonth(from);
  const starts = Array.from({ length: months }, (_, index) => addMonths(first, index));
  const end = addMonths(first, months);
  const sumOf = (wanted: (on: ClinicDate | null) => boolean) =>
    promises
      .filter(({ expectedOn }) => wanted(expectedOn))
      .reduce((total, { amountMinor }) => add(total, amountMinor), ZERO);
  const byMonth = new Map<string, Minor>();
  for (const { expectedOn, amountMinor } of promises) {
    if (expectedOn === null) continue;
    const month = firstOfMonth(expectedOn);
    byMonth.set(month, add(byMonth.get(month) ?? ZERO, amountMinor));
  }
  return {
    overdueMinor: sumOf((on) => on !== null && on < first),
    months: starts.map((month) => ({ month, amountMinor: byMonth.get(month) ?? ZERO })),
    laterMinor: sumOf((on) => on !== null && on >= end),
    undatedMinor: sumOf((on) => on === null),
    totalMinor: sumOf(() => true),
  };
}
