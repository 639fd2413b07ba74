import { EYES, type Eye } from '#domain/eye';
import { greatest, least, type Minor, minor, subtract, sum, ZERO } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';

/** What of a course money goes to: an eye's share, or the rest that belongs to both. */
export interface CourseShares {
  readonly totalMinor: Minor;
  readonly eyes: readonly {
    readonly eye: Eye;
    readonly shareMinor: Minor;
    readonly surgeryOn: ClinicDate | null;
  }[];
}

export interface DueSum {
  readonly dueNo: number;
  readonly dueOn: ClinicDate | null;
  readonly amountMinor: Minor;
}

export type MoneyState = 'none' | 'half' | 'whole';

export interface PaidFor {
  readonly dues: readonly { readonly dueNo: number; readonly paidMinor: Minor }[];
  readonly eyes: readonly {
    readonly eye: Eye;
    readonly paidMinor: Minor;
    readonly unpaidMinor: Minor;
    readonly money: MoneyState;
  }[];
  readonly restPaidMinor: Minor;
}

/**
 * What the money paid so far has paid for: the sums due in the order of their days, and the eyes in the order of their
 * surgery, right before left on the same day, then the rest. An eye without a day comes after those with one.
 * Pure arithmetic on what was paid; it never decides what is owed.
 */
export function paidFor(course: CourseShares, dues: readonly DueSum[], paidMinor: Minor): PaidFor {
  return { dues: fillDues(dues, paidMinor), ...fillEyes(course, paidMinor) };
}

function fillDues(dues: readonly DueSum[], paidMinor: Minor): PaidFor['dues'] {
  let left = paidMinor;
  const inOrder = [...dues].sort((a, b) => compareDays(a.dueOn, b.dueOn) || a.dueNo - b.dueNo);
  const filled = inOrder.map((due) => {
    const paid = least(due.amountMinor, greatest(left, ZERO));
    left = subtract(left, paid);
    return { dueNo: due.dueNo, paidMinor: paid };
  });
  return filled.sort((a, b) => a.dueNo - b.dueNo);
}

function fillEyes(course: CourseShares, paidMinor: Minor): Omit<PaidFor, 'dues'> {
  let left = paidMinor;
  const inOrder = [...course.eyes].sort(
    (a, b) => compareDays(a.surgeryOn, b.surgeryOn) || EYES.indexOf(a.eye) - EYES.indexOf(b.eye),
  );
  const filled = inOrder.map((eye) => {
    const paid = least(eye.shareMinor, greatest(left, ZERO));
    left = subtract(left, paid);
    return {
      eye: eye.eye,
      paidMinor: paid,
      unpaidMinor: subtract(eye.shareMinor, paid),
      money: moneyState(paid, eye.shareMinor),
    };
  });
  const rest = subtract(course.totalMinor, sum(course.eyes.map((eye) => eye.shareMinor)));
  return {
    eyes: filled.sort((a, b) => EYES.indexOf(a.eye) - EYES.indexOf(b.eye)),
    restPaidMinor: least(greatest(rest, ZERO), greatest(left, ZERO)),
  };
}

/** No rule for nothing, half a rule for a part, a whole rule for all of it. An eye that costs nothing is paid. */
export function moneyState(paidMinor: Minor, shareMinor: Minor): MoneyState {
  if (paidMinor >= shareMinor) return 'whole';
  return paidMinor > 0 ? 'half' : 'none';
}

/** Sums due on a day and before, less what was paid; never below zero. Sums without a day are not due yet. */
export function dueNow(dues: readonly DueSum[], paidMinor: Minor, today: ClinicDate): Minor {
  const due = sum(
    dues
      .filter((sumDue) => sumDue.dueOn !== null && sumDue.dueOn <= today)
      .map((sumDue) => sumDue.amountMinor),
  );
  return greatest(minor(due - paidMinor), ZERO);
}

function compareDays(a: ClinicDate | null, b: ClinicDate | null): number {
  if (a === b) return 0;
  if (a === null) return 1;
  if (b === null) return -1;
  return a < b ? -1 : 1;
}
