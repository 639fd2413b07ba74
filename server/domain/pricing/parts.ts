import type { Laterality } from '#domain/eye';
import { add, type Minor, times } from '#domain/money/index';
import { coverOf, followUpsOf } from './aftercare.ts';
import type { WantedCourse, WantedEye } from './check-input.ts';
import type { Step } from './explain.ts';
import { chargeOf, newPart, type Part, type Promised } from './part.ts';
import type { AddOn, Band, EnhancementCover, FollowUpSchedule, PriceList } from './price-book.ts';

/** Everything wanted, priced one by one in the order first eye, second eye, both. */
export function collectParts(wanted: WantedCourse): Part[] {
  const parts: Part[] = [];
  for (const eye of wanted.eyes) addSurgery(parts, eye, wanted);
  addAddOns(parts, wanted);
  for (const schedule of followUpsOf(wanted)) addFollowUp(parts, schedule, wanted);
  for (const eye of wanted.eyes) {
    const cover = coverOf(wanted, eye);
    if (cover) parts.push(coverPart(cover, eye, wanted));
  }
  return parts;
}

/** A figure of the book or, where the patient's price list names it, of the list. */
export function listed(priceList: PriceList | null, ruleId: string, bookMinor: Minor): Minor {
  if (priceList?.rule.kind !== 'prices') return bookMinor;
  return priceList.rule.prices[ruleId] ?? bookMinor;
}

function addSurgery(parts: Part[], wantedEye: WantedEye, wanted: WantedCourse): void {
  const { eye, procedure, bands } = wantedEye;
  const price = listed(wanted.priceList, procedure.id, procedure.priceMinor);
  const why: Step[] = [
    { label: 'Procedure', text: procedure.label },
    { label: 'Price per eye', amountMinor: procedure.priceMinor },
  ];
  if (price !== procedure.priceMinor && wanted.priceList) {
    why.push({ label: wanted.priceList.label, amountMinor: price });
  }
  const words = {
    row: 'surgery',
    kind: 'procedure',
    ruleId: procedure.id,
    label: 'Surgery',
    detail: procedure.label,
  } as const;
  const { taxClassId } = procedure;
  parts.push(
    newPart(words, eye, taxClassId, price, surgeryPromise(wantedEye, procedure.standAloneMinor), why, true),
  );
  for (const band of bands) {
    const standAlone = chargeOf(band.charge, procedure.standAloneMinor);
    const amount = chargeOf(band.charge, price);
    const named = {
      row: `band:${band.id}`,
      kind: 'band',
      ruleId: band.id,
      label: band.label,
      detail: null,
    } as const;
    parts.push(
      newPart(
        named,
        eye,
        taxClassId,
        amount,
        surgeryPromise(wantedEye, standAlone),
        bandSteps(band, wantedEye),
        true,
      ),
    );
  }
}

function surgeryPromise({ eye, procedure }: WantedEye, standAloneMinor: Minor): Promised {
  const obligationId = eye === 'OD' ? 'surgery:OD' : 'surgery:OS';
  return { obligationId, kind: 'surgery', label: procedure.label, laterality: eye, standAloneMinor };
}

function bandSteps(band: Band, { wish, form, meridianMd }: WantedEye): Step[] {
  const { sphereMd, cylinderMd, axisDeg } = wish.prescription;
  return [
    { label: 'Entered', sphereMd, cylinderMd, axisDeg },
    {
      label: 'Minus-cylinder form',
      sphereMd: form.sphereMd,
      cylinderMd: form.cylinderMd,
      axisDeg: form.axisDeg,
    },
    band.measure === 'cylinder'
      ? { label: 'Cylinder', sizeMd: Math.abs(form.cylinderMd) }
      : { label: 'Strongest meridian', powerMd: meridianMd },
    band.charge.kind === 'amount'
      ? { label: `Band "${band.label}", per eye`, amountMinor: band.charge.amountMinor }
      : { label: `Band "${band.label}", of the procedure`, rateBp: band.charge.rateBp },
  ];
}

/** Add-ons that bands require, that the package includes, that were asked for: each once. */
function addAddOns(parts: Part[], wanted: WantedCourse): void {
  const { addOns } = wanted.compiled;
  for (const { eye, bands } of wanted.eyes) {
    for (const band of bands) {
      for (const id of band.requiresAddOnIds) addAddOn(parts, addOns.get(id), eye, band, wanted);
    }
  }
  for (const id of wanted.package?.includes.addOnIds ?? []) {
    const addOn = addOns.get(id);
    if (addOn?.per === 'eye') for (const { eye } of wanted.eyes) addAddOn(parts, addOn, eye, null, wanted);
    else addAddOn(parts, addOn, 'OU', null, wanted);
  }
  for (const { addOn, laterality } of wanted.addOns) addAddOn(parts, addOn, laterality, null, wanted);
}

function addAddOn(
  parts: Part[],
  addOn: AddOn | undefined,
  laterality: Laterality,
  band: Band | null,
  wanted: WantedCourse,
): void {
  if (!addOn) return;
  for (const part of parts) if (part.words.ruleId === addOn.id && part.laterality === laterality) return;
  parts.push(addOnPart(addOn, laterality, band, wanted));
}

function addOnPart(addOn: AddOn, laterality: Laterality, band: Band | null, wanted: WantedCourse): Part {
  const count = addOn.per === 'session' && wanted.staged ? 2 : 1;
  const each = listed(wanted.priceList, addOn.id, addOn.priceMinor);
  const why: Step[] = [{ label: `Price per ${addOn.per}`, amountMinor: each }];
  if (count > 1) why.push({ label: 'Sessions', text: String(count) });
  if (band) why.push({ label: 'Needed with', text: band.label });
  const ofSurgery = addOn.purpose === 'surgery' && laterality !== 'OU';
  const surgery = wanted.eyes.find(({ eye }) => eye === laterality)?.procedure.label;
  const words = {
    row: `add-on:${addOn.id}`,
    kind: 'add_on',
    ruleId: addOn.id,
    label: addOn.label,
    detail: band ? `needed with this ${band.measure}` : count > 1 ? `${count} sessions` : null,
  } as const;
  const promise = {
    obligationId: ofSurgery ? `surgery:${laterality}` : obligationOf(addOn),
    kind: addOn.purpose,
    label: ofSurgery ? (surgery ?? addOn.label) : addOn.label,
    laterality: addOn.purpose === 'assessment' ? 'OU' : laterality,
    standAloneMinor: times(addOn.standAloneMinor, count),
  } as const;
  return newPart(words, laterality, addOn.taxClassId, times(each, count), promise, why);
}

function obligationOf(addOn: AddOn): string {
  return addOn.purpose === 'assessment' ? 'assessment' : `${addOn.purpose}:${addOn.id}`;
}

function addFollowUp(parts: Part[], schedule: FollowUpSchedule, wanted: WantedCourse): void {
  if (schedule.per === 'course') {
    parts.push(followUpPart(schedule, 'OU', wanted));
    return;
  }
  const own = wanted.eyes.filter(({ procedure }) => procedure.followUpId === schedule.id);
  for (const { eye } of own.length > 0 ? own : wanted.eyes) parts.push(followUpPart(schedule, eye, wanted));
}

function followUpPart(schedule: FollowUpSchedule, laterality: Laterality, wanted: WantedCourse): Part {
  const amount = listed(wanted.priceList, schedule.id, schedule.priceMinor);
  const words = {
    row: `aftercare:${schedule.id}`,
    kind: 'aftercare',
    ruleId: schedule.id,
    label: schedule.label,
    detail: null,
  } as const;
  const promise = {
    obligationId: 'aftercare',
    kind: 'aftercare',
    label: schedule.label,
    laterality,
    standAloneMinor: schedule.standAloneMinor,
  } as const;
  return newPart(words, laterality, schedule.taxClassId, amount, promise, [
    { label: `Price per ${schedule.per}`, amountMinor: amount },
    { label: 'Visits', text: String(schedule.visits.length) },
  ]);
}

function coverPart(cover: EnhancementCover, { eye }: WantedEye, wanted: WantedCourse): Part {
  const amount = listed(wanted.priceList, cover.id, cover.priceMinor);
  const words = {
    row: `cover:${cover.id}`,
    kind: 'cover',
    ruleId: cover.id,
    label: cover.label,
    detail: null,
  } as const;
  const promise = {
    obligationId: 'enhancement',
    kind: 'enhancement',
    label: cover.label,
    laterality: eye,
    standAloneMinor: cover.standAloneMinor,
  } as const;
  return newPart(words, eye, cover.taxClassId, amount, promise, [
    { label: 'Price per eye', amountMinor: amount },
    { label: 'Months from surgery', text: String(cover.months) },
  ]);
}

/** Sum of what parts stand at, as the book states it. */
export function netOf(parts: readonly Part[]): Minor {
  let total = 0 as Minor;
  for (const part of parts) total = add(total, part.netMinor);
  return total;
}
