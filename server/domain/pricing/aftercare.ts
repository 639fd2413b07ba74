import type { WantedCourse, WantedEye } from './check-input.ts';
import type { EnhancementCover, FollowUpSchedule } from './price-book.ts';

/** The visits of this course: the procedures' own, or what a discount puts in their place. */
export function followUpsOf(wanted: WantedCourse): FollowUpSchedule[] {
  const changed = changedAftercare(wanted);
  if (changed === null) return usualFollowUps(wanted);
  const schedule =
    changed.followUpId === null ? undefined : wanted.compiled.followUps.get(changed.followUpId);
  return schedule ? [schedule] : [];
}

/** The cover of one eye: what a discount leaves of it, else the package's, else what was asked for. */
export function coverOf(wanted: WantedCourse, eye: WantedEye): EnhancementCover | null {
  const changed = changedAftercare(wanted);
  const id = changed === null ? (wanted.package?.includes.coverId ?? eye.wish.coverId) : changed.coverId;
  return id === null ? null : (wanted.compiled.covers.get(id) ?? null);
}

function changedAftercare(wanted: WantedCourse) {
  for (const { rule } of wanted.discounts) if (rule.aftercare !== null) return rule.aftercare;
  return null;
}

/** Schedules priced per eye each count; of those priced per course only the dearest, both eyes being seen together. */
function usualFollowUps(wanted: WantedCourse): FollowUpSchedule[] {
  const found: FollowUpSchedule[] = [];
  let forCourse: FollowUpSchedule | null = null;
  for (const { procedure } of wanted.eyes) {
    const schedule =
      procedure.followUpId === null ? undefined : wanted.compiled.followUps.get(procedure.followUpId);
    if (!schedule) continue;
    if (schedule.per === 'eye') {
      if (!found.includes(schedule)) found.push(schedule);
    } else if (forCourse === null || isDearer(schedule, forCourse)) {
      forCourse = schedule;
    }
  }
  if (forCourse) found.push(forCourse);
  return found;
}

function isDearer(a: FollowUpSchedule, b: FollowUpSchedule): boolean {
  return a.priceMinor === b.priceMinor ? a.id < b.id : a.priceMinor > b.priceMinor;
}
