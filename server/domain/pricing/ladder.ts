import type { Eye } from '#domain/eye';
import { add, greatest, least, type Minor, subtract, sum, ZERO } from '#domain/money/index';
import { addDays, type ClinicDate, daysBetween } from '#domain/time/index';
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
  const fates = wanted.eyes.map(({ eye, on }, index): Fate => {
    const share = index === 0 ? add(shares[eye], shares.OU) : shares[eye];
    return { eye, on, shareMinor: greatest(share, ZERO) };
  });
  const rows: CancellationRow[] = [];
  const reflection = reflectionRow(wanted, fates, schedule);
  if (reflection) rows.push(reflection);
  if (fates.some(({ on }) => on === null)) addUndatedRows(rows, wanted, fates, schedule);
  else addDatedRows(rows, wanted, fates, schedule, reflection?.until ?? addDays(wanted.acceptedOn, -1));
  rows.push(
    free('unsuitable', 'Found unsuitable'),
    free('clinic_cancels', 'The clinic cancels'),
    movesRow(wanted, fates),
  );
  return rows;
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

/** One row for every day on which the sum kept changes, the days of surgery among them. */
function addDatedRows(
  rows: CancellationRow[],
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
  after: ClinicDate,
): void {
  const days: ClinicDate[] = [];
  const note = (day: ClinicDate) => {
    if (day > after && !days.includes(day)) days.push(day);
  };
  for (const { on } of fates) {
    if (on === null) continue;
    for (const { minDaysBefore } of wanted.compiled.book.cancellation.rungs)
      note(addDays(on, -minDaysBefore));
    note(on);
  }
  for (const until of days.sort()) rows.push(datedRow(wanted, fates, schedule, until));
}

function datedRow(
  wanted: WantedCourse,
  fates: readonly Fate[],
  schedule: readonly Due[],
  until: ClinicDate,
): CancellationRow {
  const { acceptedOn, compiled } = wanted;
  let keptMinor = ZERO;
  let done = ZERO;
  let nearest = Number.POSITIVE_INFINITY;
  let open: Fate | null = null;
  for (const fate of fates) {
    const { on: surgeryOn, shareMinor } = fate;
    if (surgeryOn === null || surgeryOn < until) {
      done = add(done, shareMinor);
      continue;
    }
    open = fate;
    nearest = Math.min(nearest, daysBetween(until, surgeryOn));
    const event = surgeryOn === until ? 'no_show' : 'cancels';
    const { cancellation } = compiled.book;
    const kept = keptByLadder(cancellation, { event, on: until, acceptedOn, surgeryOn, shareMinor });
    keptMinor = add(keptMinor, kept.keptMinor);
  }
  const onTheDay = nearest === 0;
  const paidMinor = askedBefore(schedule, onTheDay ? addDays(until, 1) : until, acceptedOn);
  const only = done > 0 && open ? (open.eye === 'OD' ? ', right eye only' : ', left eye only') : '';
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
    const keptMinor = sum(fates.map(({ shareMinor }) => least(chargeOf(kept, shareMinor), shareMinor)));
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
  const fees = fates.map(({ shareMinor }) => least(chargeOf(fee, shareMinor), shareMinor));
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
