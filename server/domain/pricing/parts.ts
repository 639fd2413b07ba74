import { EYES, type Eye, type Laterality } from '#domain/eye';
import { applyRate, type Minor, minor, subtract, times } from '#domain/money/index';
import { daysBetween } from '#domain/time/index';
import type { WantedCourse, WantedEye } from './check-input.ts';
import type { LineKind, ObligationKind } from './course.ts';
import type { Step } from './explain.ts';
import type { AddOn, Band, Charge, EnhancementCover, FollowUpSchedule, PriceList } from './price-book.ts';

/** Something promised and what it would cost by itself; one or more parts make an obligation. */
export interface Promised {
  readonly obligationId: string;
  readonly kind: ObligationKind;
  readonly label: string;
  readonly laterality: Laterality;
  readonly standAloneMinor: Minor;
}

/** A priced line before tax, with what has come off it so far. Lives only while a course is priced. */
export interface Part {
  readonly row: string;
  readonly kind: LineKind;
  readonly ruleId: string;
  readonly label: string;
  readonly detail: string | null;
  readonly laterality: Laterality;
  readonly taxClassId: string;
  readonly grossMinor: Minor;
  netMinor: Minor;
  readonly promise: Promised | null;
  readonly why: readonly Step[];
  /** Surgery in the sense of discounts: procedures, their bands, a package. */
  readonly isSurgery: boolean;
}

/** A reduction of one part, kept with its reason until lines are made of it. */
export interface Reduction {
  readonly row: string;
  readonly kind: LineKind;
  readonly ruleId: string;
  readonly label: string;
  readonly detail: string | null;
  readonly part: Part;
  /** What the part stood at before. */
  readonly fromMinor: Minor;
  readonly offMinor: Minor;
  readonly why: readonly Step[];
}

/** What replaces the book's usual aftercare when a discount says so. */
export interface Aftercare {
  readonly followUpIds: readonly string[];
  readonly coverOf: (wanted: WantedEye) => string | null;
}

/** Everything wanted, priced one by one in the order first eye, second eye, both. */
export function collectParts(wanted: WantedCourse): Part[] {
  const parts: Part[] = [];
  for (const eye of wanted.eyes) parts.push(...surgeryParts(eye, wanted));
  parts.push(...addOnParts(wanted));
  const aftercare = aftercareOf(wanted);
  for (const followUpId of aftercare.followUpIds) {
    const schedule = wanted.compiled.followUps.get(followUpId);
    if (schedule) parts.push(...followUpParts(schedule, wanted));
  }
  for (const eye of wanted.eyes) {
    const coverId = aftercare.coverOf(eye);
    const cover = coverId === null ? undefined : wanted.compiled.covers.get(coverId);
    if (cover) parts.push(coverPart(cover, eye, wanted));
  }
  return parts;
}

/** A figure of the book or, where the patient's price list names it, of the list. */
export function listed(priceList: PriceList | null, ruleId: string, bookMinor: Minor): Minor {
  if (priceList?.rule.kind !== 'prices') return bookMinor;
  return priceList.rule.prices[ruleId] ?? bookMinor;
}

/** The reference to the rule that ends every derivation. */
export function ruleStep(wanted: WantedCourse, ruleId: string): Step {
  return { label: 'Price book', value: { kind: 'rule', line: wanted.compiled.lineOf.get(ruleId) ?? 0 } };
}

export function moneyStep(label: string, amountMinor: Minor): Step {
  return { label, value: { kind: 'money', amountMinor } };
}

export function textStep(label: string, text: string): Step {
  return { label, value: { kind: 'text', text } };
}

/** An amount as it stands, a rate of a base rounded half away from zero. */
export function chargeOf(charge: Charge, baseMinor: Minor): Minor {
  return charge.kind === 'amount' ? charge.amountMinor : applyRate(baseMinor, charge.rateBp);
}

/** Which visits and which cover this course has: the procedures' and the wishes', a package's, or a discount's. */
export function aftercareOf(wanted: WantedCourse): Aftercare {
  const changed = wanted.discounts.find((discount) => discount.rule.aftercare !== null)?.rule.aftercare;
  if (changed) {
    const followUpIds = changed.followUpId === null ? [] : [changed.followUpId];
    return { followUpIds, coverOf: () => changed.coverId };
  }
  return {
    followUpIds: usualFollowUps(wanted),
    coverOf: (eye) => wanted.package?.includes.coverId ?? eye.wish.coverId,
  };
}

/** Schedules priced per eye each count; of those priced per course only the dearest, both eyes being seen together. */
function usualFollowUps(wanted: WantedCourse): string[] {
  const ids = new Set(wanted.eyes.map((eye) => eye.procedure.followUpId).filter((id) => id !== null));
  const schedules = [...ids]
    .map((id) => wanted.compiled.followUps.get(id))
    .filter((found) => found !== undefined);
  const perCourse = schedules
    .filter((schedule) => schedule.per === 'course')
    .sort((a, b) => b.priceMinor - a.priceMinor || (a.id < b.id ? -1 : 1));
  return [...schedules.filter((schedule) => schedule.per === 'eye'), ...perCourse.slice(0, 1)].map(
    ({ id }) => id,
  );
}

function surgeryParts(wantedEye: WantedEye, wanted: WantedCourse): Part[] {
  const { eye, procedure, bands } = wantedEye;
  const priceMinor = listed(wanted.priceList, procedure.id, procedure.priceMinor);
  const common = { laterality: eye, taxClassId: procedure.taxClassId, isSurgery: true } as const;
  const promise = (standAloneMinor: Minor): Promised => ({
    obligationId: `surgery:${eye}`,
    kind: 'surgery',
    label: procedure.label,
    laterality: eye,
    standAloneMinor,
  });
  const why = [textStep('Procedure', procedure.label), moneyStep('Price per eye', procedure.priceMinor)];
  if (priceMinor !== procedure.priceMinor && wanted.priceList) {
    why.push(moneyStep(wanted.priceList.label, priceMinor));
  }
  const surgery: Part = {
    ...common,
    row: 'surgery',
    kind: 'procedure',
    ruleId: procedure.id,
    label: 'Surgery',
    detail: procedure.label,
    grossMinor: priceMinor,
    netMinor: priceMinor,
    promise: promise(procedure.standAloneMinor),
    why: [...why, ruleStep(wanted, procedure.id)],
  };
  return [
    surgery,
    ...bands.map((band): Part => {
      const amount = chargeOf(band.charge, priceMinor);
      return {
        ...common,
        row: `band:${band.id}`,
        kind: 'band',
        ruleId: band.id,
        label: band.label,
        detail: null,
        grossMinor: amount,
        netMinor: amount,
        promise: promise(chargeOf(band.charge, procedure.standAloneMinor)),
        why: bandSteps(band, wantedEye, wanted),
      };
    }),
  ];
}

function bandSteps(band: Band, wantedEye: WantedEye, wanted: WantedCourse): Step[] {
  const { sphereMd, cylinderMd, axisDeg } = wantedEye.wish.prescription;
  const { form, meridianMd } = wantedEye;
  const charge: Step =
    band.charge.kind === 'amount'
      ? moneyStep(`Band “${band.label}”`, band.charge.amountMinor)
      : { label: `Band “${band.label}”`, value: { kind: 'rate', rateBp: band.charge.rateBp } };
  return [
    { label: 'Entered', value: { kind: 'prescription', sphereMd, cylinderMd, axisDeg } },
    { label: 'Minus-cylinder form', value: { kind: 'prescription', ...form } },
    band.measure === 'cylinder'
      ? { label: 'Cylinder', value: { kind: 'size', sizeMd: Math.abs(form.cylinderMd) } }
      : { label: 'Strongest meridian', value: { kind: 'power', powerMd: meridianMd } },
    charge,
    ruleStep(wanted, band.id),
  ];
}

function addOnParts(wanted: WantedCourse): Part[] {
  const parts: Part[] = [];
  const taken = new Set<string>();
  const take = (addOn: AddOn | undefined, laterality: Laterality, band: Band | null): void => {
    if (!addOn || taken.has(`${addOn.id} ${laterality}`)) return;
    taken.add(`${addOn.id} ${laterality}`);
    parts.push(addOnPart(addOn, laterality, band, wanted));
  };
  for (const { eye, bands } of wanted.eyes) {
    for (const band of bands) {
      for (const id of band.requiresAddOnIds) take(wanted.compiled.addOns.get(id), eye, band);
    }
  }
  for (const id of wanted.package?.includes.addOnIds ?? []) {
    const addOn = wanted.compiled.addOns.get(id);
    if (addOn?.per === 'eye') for (const { eye } of wanted.eyes) take(addOn, eye, null);
    else take(addOn, 'OU', null);
  }
  for (const { addOn, laterality } of wanted.addOns) take(addOn, laterality, null);
  return parts;
}

function addOnPart(addOn: AddOn, laterality: Laterality, band: Band | null, wanted: WantedCourse): Part {
  const count = addOn.per === 'session' && wanted.staged ? 2 : 1;
  const each = listed(wanted.priceList, addOn.id, addOn.priceMinor);
  const amount = times(each, count);
  const why = [moneyStep(`Price per ${addOn.per}`, each)];
  if (count > 1) why.push(textStep('Sessions', String(count)));
  if (band) why.push(textStep('Needed with', band.label));
  const ofSurgery = addOn.purpose === 'surgery' && laterality !== 'OU';
  const surgery = wanted.eyes.find(({ eye }) => eye === laterality)?.procedure.label;
  return {
    row: `add-on:${addOn.id}`,
    kind: 'add_on',
    ruleId: addOn.id,
    label: addOn.label,
    detail: band ? `needed with this ${band.measure}` : count > 1 ? `${count} sessions` : null,
    laterality,
    taxClassId: addOn.taxClassId,
    isSurgery: false,
    grossMinor: amount,
    netMinor: amount,
    promise: {
      obligationId: ofSurgery ? `surgery:${laterality}` : obligationOf(addOn),
      kind: addOn.purpose === 'surgery' ? 'surgery' : addOn.purpose,
      label: ofSurgery ? (surgery ?? addOn.label) : addOn.label,
      laterality: addOn.purpose === 'assessment' ? 'OU' : laterality,
      standAloneMinor: times(addOn.standAloneMinor, count),
    },
    why: [...why, ruleStep(wanted, addOn.id)],
  };
}

function obligationOf(addOn: AddOn): string {
  return addOn.purpose === 'assessment' ? 'assessment' : `${addOn.purpose}:${addOn.id}`;
}

function followUpParts(schedule: FollowUpSchedule, wanted: WantedCourse): Part[] {
  const amount = listed(wanted.priceList, schedule.id, schedule.priceMinor);
  const eyes = wanted.eyes.filter(({ procedure }) => procedure.followUpId === schedule.id);
  const where: readonly Laterality[] =
    schedule.per === 'course' ? ['OU'] : (eyes.length > 0 ? eyes : wanted.eyes).map(({ eye }) => eye);
  return where.map((laterality) => ({
    row: `aftercare:${schedule.id}`,
    kind: 'aftercare',
    ruleId: schedule.id,
    label: schedule.label,
    detail: null,
    laterality,
    taxClassId: schedule.taxClassId,
    isSurgery: false,
    grossMinor: amount,
    netMinor: amount,
    promise: {
      obligationId: 'aftercare',
      kind: 'aftercare',
      label: schedule.label,
      laterality,
      standAloneMinor: schedule.standAloneMinor,
    },
    why: [
      moneyStep(`Price per ${schedule.per}`, amount),
      textStep('Visits', String(schedule.visits.length)),
      ruleStep(wanted, schedule.id),
    ],
  }));
}

function coverPart(cover: EnhancementCover, { eye }: WantedEye, wanted: WantedCourse): Part {
  const amount = listed(wanted.priceList, cover.id, cover.priceMinor);
  return {
    row: `cover:${cover.id}`,
    kind: 'cover',
    ruleId: cover.id,
    label: cover.label,
    detail: null,
    laterality: eye,
    taxClassId: cover.taxClassId,
    isSurgery: false,
    grossMinor: amount,
    netMinor: amount,
    promise: {
      obligationId: 'enhancement',
      kind: 'enhancement',
      label: cover.label,
      laterality: eye,
      standAloneMinor: cover.standAloneMinor,
    },
    why: [
      moneyStep('Price per eye', amount),
      textStep('Months from surgery', String(cover.months)),
      ruleStep(wanted, cover.id),
    ],
  };
}

/** Days between the two surgeries, null where a day is missing. */
export function daysApart(wanted: WantedCourse): number | null {
  const [first, second] = wanted.eyes;
  if (!first?.on || !second?.on) return null;
  return daysBetween(first.on, second.on);
}

/** The parts of one eye, in the order of the chart. */
export function eyesOf(wanted: WantedCourse): Eye[] {
  return EYES.filter((eye) => wanted.input.eyes[eye] !== null);
}

/** Takes an amount off a part, never below nothing. Returns what came off. */
export function takeOff(part: Part, offMinor: Minor): Minor {
  const off = minor(Math.min(Math.max(offMinor, 0), part.netMinor));
  part.netMinor = subtract(part.netMinor, off);
  return off;
}
