import type { Eye } from '#domain/eye';
import {
  add,
  formatAmount,
  greatest,
  least,
  type Minor,
  minor,
  subtract,
  sum,
  ZERO,
} from '#domain/money/index';
import { addDays, type ClinicDate, daysBetween } from '#domain/time/index';
import type { WantedCourse } from './check-input.ts';
import type { ByColumn, CancellationRow, Due } from './course.ts';
import { formatRate } from './explain.ts';
import { chargeOf } from './parts.ts';
import type { CancellationLadder, Charge } from './price-book.ts';
import { askedBefore } from './schedule.ts';

/** Why a course, or one eye of it, does not take place. */
export type CancellationEvent = 'cancels' | 'no_show' | 'unsuitable' | 'clinic_cancels';

/** What the clinic keeps of one eye, and by which step of the ladder. */
export interface Kept {
  readonly keptMinor: Minor;
  /** "reflection", a rung's id, "no_show", "unsuitable", "clinic_cancels" or "no_day" (no surgery day agreed). */
  readonly by: string;
}

/**
 * What is kept of one eye by the ladder that its quote disclosed.
 *
 * @param shareMinor that eye's share of the price: what a rate is of, and the most that is ever kept
 */
export function keptByLadder(
  ladder: CancellationLadder,
  what: {
    readonly event: CancellationEvent;
    readonly on: ClinicDate;
    readonly acceptedOn: ClinicDate;
    readonly surgeryOn: ClinicDate | null;
    readonly shareMinor: Minor;
  },
): Kept {
  const { event, on, acceptedOn, surgeryOn, shareMinor } = what;
  const kept = (charge: Charge, by: string): Kept => ({
    keptMinor: least(chargeOf(charge, shareMinor), shareMinor),
    by,
  });
  if (event === 'unsuitable' || event === 'clinic_cancels') return { keptMinor: ZERO, by: event };
  if (on <= addDays(acceptedOn, ladder.reflectionDays)) return { keptMinor: ZERO, by: 'reflection' };
  if (event === 'no_show') return kept(ladder.noShow, 'no_show');
  const [top] = ladder.rungs;
  if (surgeryOn === null) return top ? kept(top.kept, 'no_day') : { keptMinor: ZERO, by: 'no_day' };
  const rung = ladder.rungs.find(({ minDaysBefore }) => daysBetween(on, surgeryOn) >= minDaysBefore);
  return rung ? kept(rung.kept, rung.id) : kept(ladder.noShow, 'no_show');
}

interface Fate {
  readonly eye: Eye;
  readonly on: ClinicDate | null;
  readonly shareMinor: Minor;
}

/** The table "if it is cancelled": until which day, what is kept, what comes back of what was asked for by then. */
export function cancellationRows(
  wanted: WantedCourse,
  shares: ByColumn,
  schedule: readonly Due[],
): CancellationRow[] {
  const ladder = wanted.compiled.book.cancellation;
  const fates = wanted.eyes.map(({ eye, on }, index): Fate => {
    const share = index === 0 ? add(shares[eye], shares.OU) : shares[eye];
    return { eye, on, shareMinor: greatest(share, ZERO) };
  });
  const dated = fates.every(({ on }) => on !== null);
  const reflection = reflectionRow(wanted, fates, schedule);
  const after = reflection?.until ?? null;
  return [
    ...(reflection ? [reflection] : []),
    ...(dated ? datedRows(wanted, fates, schedule, after) : undatedRows(wanted, fates, schedule)),
    free('unsuitable', 'Found unsuitable'),
    free('clinic_cancels', 'The clinic cancels'),
    movesRow(ladder, fates, wanted),
  ];
}

function reflectionRow(
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
): CancellationRow | null {
  const { reflectionDays } = wanted.compiled.book.cancellation;
  if (reflectionDays === 0) return null;
  let until = addDays(wanted.acceptedOn, reflectionDays);
  for (const { on } of fates) if (on !== null && on <= until) until = addDays(on, -1);
  if (until < wanted.acceptedOn) return null;
  const paidMinor = askedBefore(schedule, until, wanted.acceptedOn);
  return {
    event: 'reflection',
    until,
    label: 'Time to reflect',
    detail: `${reflectionDays} days from accepting`,
    keptMinor: ZERO,
    paidMinor,
    comesBackMinor: paidMinor,
  };
}

/** One row for every day on which the sum kept changes, then the day itself. */
function datedRows(
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
  after: ClinicDate | null,
): CancellationRow[] {
  const ladder = wanted.compiled.book.cancellation;
  const days = new Set<ClinicDate>();
  for (const { on } of fates) {
    for (const { minDaysBefore } of ladder.rungs) if (on) days.add(addDays(on, -minDaysBefore));
    if (on) days.add(on);
  }
  const from = after ?? addDays(wanted.acceptedOn, -1);
  return [...days]
    .filter((day) => day > from)
    .sort()
    .flatMap((until) => datedRow(wanted, fates, schedule, until) ?? []);
}

function datedRow(
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
  until: ClinicDate,
): CancellationRow | null {
  const ladder = wanted.compiled.book.cancellation;
  const open = fates.filter(({ on }) => on !== null && on >= until);
  const noShow = open.some(({ on }) => on === until);
  const kept = open.map(({ on, shareMinor }) =>
    keptByLadder(ladder, {
      event: on === until ? 'no_show' : 'cancels',
      on: until,
      acceptedOn: wanted.acceptedOn,
      surgeryOn: on,
      shareMinor,
    }),
  );
  const keptMinor = sum(kept.map((each) => each.keptMinor));
  const done = sum(fates.filter(({ on }) => on !== null && on < until).map((fate) => fate.shareMinor));
  const paidMinor = askedBefore(schedule, noShow ? addDays(until, 1) : until, wanted.acceptedOn);
  const back = subtract(subtract(paidMinor, done), keptMinor);
  const only = open.length < fates.length ? `, ${open[0]?.eye === 'OD' ? 'right' : 'left'} eye only` : '';
  return {
    event: noShow ? 'no_show' : 'cancels',
    until,
    label: noShow ? `Does not come${only}` : `Cancels${only}`,
    detail: noShow ? 'on the day' : daysWords(until, open),
    keptMinor,
    paidMinor,
    comesBackMinor: greatest(back, ZERO),
  };
}

function daysWords(until: ClinicDate, open: readonly Fate[]): string {
  const days = open.map(({ on }) => (on === null ? 0 : daysBetween(until, on)));
  const nearest = Math.min(...days);
  return `${nearest} ${nearest === 1 ? 'day' : 'days'} or more before surgery`;
}

/** The same while no day is agreed: by days before surgery, with what is due by then. */
function undatedRows(
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
): CancellationRow[] {
  const { cancellation, balanceDueDays } = wanted.compiled.book;
  return cancellation.rungs.map(({ minDaysBefore, kept }) => {
    const keptMinor = sum(fates.map(({ shareMinor }) => least(chargeOf(kept, shareMinor), shareMinor)));
    const asked = schedule.filter(
      (due) => due.kind === 'deposit' || (due.dueOn === null && minDaysBefore < balanceDueDays),
    );
    const paidMinor = sum(asked.map((due) => due.amountMinor));
    return {
      event: 'cancels',
      until: null,
      label: 'Cancels',
      detail: `${minDaysBefore} ${minDaysBefore === 1 ? 'day' : 'days'} or more before surgery`,
      keptMinor,
      paidMinor,
      comesBackMinor: greatest(subtract(paidMinor, keptMinor), ZERO),
    };
  });
}

function free(event: 'unsuitable' | 'clinic_cancels', label: string): CancellationRow {
  return {
    event,
    until: null,
    label,
    detail: 'any day',
    keptMinor: ZERO,
    paidMinor: null,
    comesBackMinor: null,
  };
}

function movesRow(ladder: CancellationLadder, fates: readonly Fate[], wanted: WantedCourse): CancellationRow {
  const { freeMoves, fee } = ladder.reschedule;
  const keptMinor = sum(fates.map(({ shareMinor }) => least(chargeOf(fee, shareMinor), shareMinor)));
  const times = freeMoves === 1 ? 'once free' : `${freeMoves} times free`;
  const cost =
    fee.kind === 'rate'
      ? formatRate(fee.rateBp)
      : formatAmount(fee.amountMinor, wanted.compiled.book.currency);
  return {
    event: 'moves',
    until: null,
    label: 'Moves the day',
    detail: `${freeMoves === 0 ? '' : `${times}, then `}${cost} an eye`,
    keptMinor: freeMoves === 0 ? keptMinor : minor(0),
    paidMinor: null,
    comesBackMinor: null,
  };
}
