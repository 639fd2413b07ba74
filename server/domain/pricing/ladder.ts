import type { Eye } from '#domain/eye';
import { add, greatest, least, type Minor, subtract, sum, ZERO } from '#domain/money/index';
import { addDays, type ClinicDate, dayNumber, daysBetween, dayText } from '#domain/time/index';
import type { WantedCourse } from './check-input.ts';
import type { ByColumn, CancellationRow, Due } from './course.ts';
import { chargeOf } from './part.ts';
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
  if (event === 'unsuitable' || event === 'clinic_cancels') return { keptMinor: ZERO, by: event };
  if (on <= addDays(acceptedOn, ladder.reflectionDays)) return { keptMinor: ZERO, by: 'reflection' };
  if (event === 'no_show') return { keptMinor: atMost(ladder.noShow, shareMinor), by: 'no_show' };
  if (surgeryOn !== null) return keptOfDays(ladder, daysBetween(on, surgeryOn), shareMinor);
  const [top] = ladder.rungs;
  return { keptMinor: top ? atMost(top.kept, shareMinor) : ZERO, by: 'no_day' };
}

/** What the rungs keep some days before surgery; on the day itself what a no-show costs. */
function keptOfDays(ladder: CancellationLadder, daysBefore: number, shareMinor: Minor): Kept {
  for (const { id, minDaysBefore, kept } of ladder.rungs) {
    if (daysBefore >= minDaysBefore && daysBefore > 0) return { keptMinor: atMost(kept, shareMinor), by: id };
  }
  return { keptMinor: atMost(ladder.noShow, shareMinor), by: 'no_show' };
}

function atMost(charge: Charge, shareMinor: Minor): Minor {
  return least(chargeOf(charge, shareMinor), shareMinor);
}

/** One eye's surgery day as a number of days, and its share of the price. */
interface Fate {
  readonly eye: Eye;
  readonly day: number;
  readonly shareMinor: Minor;
}

/** The table "if it is cancelled": until which day, what is kept, what comes back of what was asked for by then. */
export function cancellationRows(
  wanted: WantedCourse,
  shares: ByColumn,
  schedule: readonly Due[],
): CancellationRow[] {
  const fates: Fate[] = [];
  let dated = true;
  for (const { eye, on } of wanted.eyes) {
    const share = fates.length === 0 ? add(shares[eye], shares.OU) : shares[eye];
    if (on === null) dated = false;
    fates.push({
      eye,
      day: on === null ? Number.POSITIVE_INFINITY : dayNumber(on),
      shareMinor: greatest(share, ZERO),
    });
  }
  const accepted = dayNumber(wanted.acceptedOn);
  const rows: CancellationRow[] = [];
  const reflected = addReflection(rows, wanted, fates, schedule, accepted);
  if (dated) addDatedRows(rows, wanted, fates, schedule, accepted, reflected);
  else addUndatedRows(rows, wanted, fates, schedule);
  rows.push(
    free('unsuitable', 'Found unsuitable'),
    free('clinic_cancels', 'The clinic cancels'),
    movesRow(wanted, fates),
  );
  return rows;
}

/** The row in which everything comes back. Returns its last day, the day before acceptance when there is none. */
function addReflection(
  rows: CancellationRow[],
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
  accepted: number,
): number {
  const { reflectionDays } = wanted.compiled.book.cancellation;
  let last = accepted + reflectionDays;
  for (const { day } of fates) if (day <= last) last = day - 1;
  if (reflectionDays === 0 || last < accepted) return accepted - 1;
  const until = dayText(last) as ClinicDate;
  const paidMinor = askedBefore(schedule, until, wanted.acceptedOn);
  rows.push({
    event: 'reflection',
    until,
    label: 'Time to reflect',
    detail: `${reflectionDays} days from accepting`,
    keptMinor: ZERO,
    paidMinor,
    comesBackMinor: paidMinor,
  });
  return last;
}

/** One row for every day on which the sum kept changes, the days of surgery among them. */
function addDatedRows(
  rows: CancellationRow[],
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
  accepted: number,
  reflected: number,
): void {
  const { rungs } = wanted.compiled.book.cancellation;
  const days: number[] = [];
  for (const { day } of fates) {
    for (const { minDaysBefore } of rungs) days.push(day - minDaysBefore);
    days.push(day);
  }
  let before = reflected;
  for (const day of days.sort((a, b) => a - b)) {
    if (day <= before) continue;
    before = day;
    rows.push(datedRow(wanted, fates, schedule, day, accepted));
  }
}

function datedRow(
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
  day: number,
  accepted: number,
): CancellationRow {
  const { cancellation } = wanted.compiled.book;
  const reflecting = day <= accepted + cancellation.reflectionDays;
  let keptMinor = ZERO;
  let done = ZERO;
  let nearest = Number.POSITIVE_INFINITY;
  let open: Eye | null = null;
  for (const fate of fates) {
    if (fate.day < day) {
      done = add(done, fate.shareMinor);
      continue;
    }
    open = fate.eye;
    if (fate.day - day < nearest) nearest = fate.day - day;
    if (!reflecting)
      keptMinor = add(keptMinor, keptOfDays(cancellation, fate.day - day, fate.shareMinor).keptMinor);
  }
  const onTheDay = nearest === 0;
  const until = dayText(day) as ClinicDate;
  const paidMinor = askedBefore(schedule, until, onTheDay ? until : wanted.acceptedOn);
  const only = done === 0 ? '' : open === 'OD' ? ', right eye only' : ', left eye only';
  return {
    event: onTheDay ? 'no_show' : 'cancels',
    until,
    label: (onTheDay ? 'Does not come' : 'Cancels') + only,
    detail: onTheDay ? 'on the day' : orMoreWords(nearest),
    keptMinor,
    paidMinor,
    comesBackMinor: greatest(subtract(subtract(paidMinor, done), keptMinor), ZERO),
  };
}

function orMoreWords(days: number): string {
  return days === 1 ? '1 day or more before surgery' : `${days} days or more before surgery`;
}

/** The same while no day is agreed: by days before surgery, with what is due by then. */
function addUndatedRows(
  rows: CancellationRow[],
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
): void {
  const { cancellation, balanceDueDays } = wanted.compiled.book;
  for (const { minDaysBefore, kept } of cancellation.rungs) {
    const keptMinor = sum(fates.map(({ shareMinor }) => atMost(kept, shareMinor)));
    const asked = schedule.filter(
      (due) => due.kind === 'deposit' || (due.dueOn === null && minDaysBefore < balanceDueDays),
    );
    const paidMinor = sum(asked.map((due) => due.amountMinor));
    rows.push({
      event: 'cancels',
      until: null,
      label: 'Cancels',
      detail: orMoreWords(minDaysBefore),
      keptMinor,
      paidMinor,
      comesBackMinor: greatest(subtract(paidMinor, keptMinor), ZERO),
    });
  }
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

function movesRow(wanted: WantedCourse, fates: readonly Fate[]): CancellationRow {
  const { freeMoves, fee } = wanted.compiled.book.cancellation.reschedule;
  const fees = fates.map(({ shareMinor }) => atMost(fee, shareMinor));
  return {
    event: 'moves',
    until: null,
    label: 'Moves the day',
    detail: wanted.compiled.words.moves,
    keptMinor: freeMoves === 0 ? sum(fees) : ZERO,
    paidMinor: null,
    comesBackMinor: null,
  };
}
