import { EYES, type Eye, otherEye } from '#domain/eye';
import {
  checkPrescription,
  formatDioptres,
  type MinusForm,
  minusForm,
  strongestMeridianMd,
} from '#domain/prescription/index';
import type { ClinicDate } from '#domain/time/index';
import { type ChosenDiscount, checkDiscounts } from './check-discounts.ts';
import { checkPackage } from './check-package.ts';
import { bandAt, type CompiledPriceBook, pairKey } from './compile.ts';
import type { AddOnWish, CourseInput, EyeWish, Refusal, RefusalCode } from './course.ts';
import type { AddOn, Band, Package, PaymentPlan, PriceList, Procedure, SecondEyeRule } from './price-book.ts';

/** One eye with everything the book knows about it. */
export interface WantedEye {
  readonly eye: Eye;
  readonly wish: EyeWish;
  readonly procedure: Procedure;
  readonly form: MinusForm;
  readonly meridianMd: number;
  readonly bands: readonly Band[];
  readonly on: ClinicDate | null;
}

/** An input whose every reference was found. */
export interface WantedCourse {
  readonly input: CourseInput;
  readonly compiled: CompiledPriceBook;
  readonly acceptedOn: ClinicDate;
  /** The first eye first: by day when staged, else the dearer procedure; independent of which side it is on. */
  readonly eyes: readonly WantedEye[];
  readonly staged: boolean;
  readonly secondEyeRule: SecondEyeRule | null;
  readonly addOns: readonly { readonly addOn: AddOn; readonly laterality: AddOnWish['laterality'] }[];
  readonly priceList: PriceList | null;
  readonly package: Package | null;
  readonly discounts: readonly ChosenDiscount[];
  readonly plan: PaymentPlan | null;
}

/** Collects refusals while the input is read. */
export type Refuse = (field: string, code: RefusalCode, words: string, change: string) => void;

/** Looks up everything the input names. Refuses all that is wrong at once, so that a form can show it together. */
export function checkInput(
  input: CourseInput,
  compiled: CompiledPriceBook,
):
  | { readonly ok: true; readonly wanted: WantedCourse }
  | { readonly ok: false; readonly refusals: Refusal[] } {
  const refusals: Refusal[] = [];
  const refuse: Refuse = (field, code, words, change) => refusals.push({ field, code, words, change });
  const eyes: WantedEye[] = [];
  for (const eye of EYES) {
    const wanted = checkEye(eye, input, compiled, refuse);
    if (wanted) eyes.push(wanted);
  }
  if (input.eyes.OD === null && input.eyes.OS === null) {
    refuse('eyes', 'no_eye', 'Neither eye is to be treated.', 'Choose a procedure for at least one eye.');
  }
  const staged = isStaged(input, eyes);
  eyes.sort(staged ? byDay : byPrice);
  const secondEyeRule = ruleForPair(eyes, compiled);
  checkDays(input, eyes, staged, secondEyeRule, refuse);
  const wanted: WantedCourse = {
    input,
    compiled,
    acceptedOn: input.acceptedOn ?? input.quotedOn,
    eyes,
    staged,
    secondEyeRule,
    addOns: checkAddOns(input, compiled, refuse),
    priceList: find(compiled.priceLists, input.priceListId, 'priceListId', 'price list', refuse),
    package: checkPackage(input, compiled, eyes, refuse),
    discounts: checkDiscounts(input, compiled, refuse),
    plan: find(compiled.paymentPlans, input.paymentPlanId, 'paymentPlanId', 'payment plan', refuse),
  };
  return refusals.length === 0 ? { ok: true, wanted } : { ok: false, refusals };
}

function checkEye(
  eye: Eye,
  input: CourseInput,
  compiled: CompiledPriceBook,
  refuse: Refuse,
): WantedEye | null {
  const wish = input.eyes[eye];
  if (wish === null) return null;
  const faults = checkPrescription(wish.prescription);
  for (const fault of faults) {
    refuse(`eyes.${eye}.prescription.${fault.field}`, 'prescription', fault.words, fault.change);
  }
  const procedure = find(
    compiled.procedures,
    wish.procedureId,
    `eyes.${eye}.procedureId`,
    'procedure',
    refuse,
  );
  find(compiled.covers, wish.coverId, `eyes.${eye}.coverId`, 'enhancement cover', refuse);
  if (procedure === null || faults.length > 0) return null;
  const plan = input.approvedPlan;
  if (plan && plan.expiresOn >= input.quotedOn && !plan.procedureIds[eye].includes(procedure.id)) {
    refuse(
      `eyes.${eye}.procedureId`,
      'not_approved',
      `${plan.approvedBy} has not approved ${procedure.label} for this eye.`,
      'Choose an approved procedure, or ask the surgeon.',
    );
  }
  const form = minusForm(wish.prescription);
  const meridianMd = strongestMeridianMd(form);
  const bands: Band[] = [];
  const meridian = checkBand(eye, procedure, compiled, 'meridian', Math.abs(meridianMd), refuse);
  if (meridian) bands.push(meridian);
  const cylinder = checkBand(eye, procedure, compiled, 'cylinder', Math.abs(form.cylinderMd), refuse);
  if (cylinder) bands.push(cylinder);
  return { eye, wish, procedure, form, meridianMd, bands, on: dayOfEye(input, eye) };
}

function checkBand(
  eye: Eye,
  procedure: Procedure,
  compiled: CompiledPriceBook,
  measure: Band['measure'],
  sizeMd: number,
  refuse: Refuse,
): Band | null {
  const band = bandAt(compiled, procedure.id, measure, sizeMd);
  if (band === 'below') return null;
  if (band !== 'unpriced') return band;
  refuse(
    `eyes.${eye}.prescription.${measure === 'cylinder' ? 'cylinder' : 'sphere'}`,
    'no_band',
    `The price book has no ${procedure.label} price for a ${measure} of ${formatDioptres(sizeMd)} D.`,
    'Choose another procedure, or ask the manager to add a band.',
  );
  return null;
}

function dayOfEye(input: CourseInput, eye: Eye): ClinicDate | null {
  return input.surgery.plan === 'staged' ? input.surgery.on[eye] : input.surgery.on;
}

/** Two eyes on one day are one session, whatever the plan is called. */
function isStaged(input: CourseInput, eyes: readonly WantedEye[]): boolean {
  if (input.surgery.plan !== 'staged' || eyes.length < 2) return false;
  const { OD, OS } = input.surgery.on;
  return OD === null || OD !== OS;
}

/** The dearer procedure is the first eye; further ties by everything asked of the eye, never by its side. */
function byPrice(a: WantedEye, b: WantedEye): number {
  return (
    b.procedure.priceMinor - a.procedure.priceMinor ||
    inOrder(a.procedure.id, b.procedure.id) ||
    a.form.sphereMd - b.form.sphereMd ||
    a.form.cylinderMd - b.form.cylinderMd ||
    (a.form.axisDeg ?? 0) - (b.form.axisDeg ?? 0) ||
    inOrder(a.wish.coverId ?? '', b.wish.coverId ?? '')
  );
}

function inOrder(a: string, b: string): number {
  if (a === b) return 0;
  return a < b ? -1 : 1;
}

function byDay(a: WantedEye, b: WantedEye): number {
  if (a.on === b.on) return byPrice(a, b);
  if (a.on === null || b.on === null) return a.on === null ? 1 : -1;
  return a.on < b.on ? -1 : 1;
}

function ruleForPair(eyes: readonly WantedEye[], compiled: CompiledPriceBook): SecondEyeRule | null {
  const [first, second] = eyes;
  if (!first || !second) return null;
  return compiled.secondEye.get(pairKey(first.procedure.id, second.procedure.id)) ?? null;
}

function checkDays(
  input: CourseInput,
  eyes: readonly WantedEye[],
  staged: boolean,
  rule: SecondEyeRule | null,
  refuse: Refuse,
): void {
  const start = input.acceptedOn ?? input.quotedOn;
  if (start < input.quotedOn) {
    refuse(
      'acceptedOn',
      'date_in_the_past',
      'It cannot be accepted before it is quoted.',
      'Give a later day.',
    );
  }
  for (const { eye, on } of eyes) {
    const field = staged ? `surgery.on.${eye}` : 'surgery.on';
    if (on !== null && on < start) {
      refuse(field, 'date_in_the_past', 'The surgery lies before the quote.', 'Give a later day.');
    }
    if (on === null && staged && rule?.staged) {
      refuse(
        field,
        'dates_needed',
        'The second eye’s price depends on the days between the two surgeries.',
        'Give a day for each eye.',
      );
    }
  }
}

function checkAddOns(
  input: CourseInput,
  compiled: CompiledPriceBook,
  refuse: Refuse,
): WantedCourse['addOns'] {
  const seen = new Set<string>();
  return input.addOns.flatMap((wish, index) => {
    const field = `addOns.${index}`;
    const addOn = find(compiled.addOns, wish.addOnId, `${field}.addOnId`, 'add-on', refuse);
    if (addOn === null) return [];
    const key = `${wish.addOnId} ${wish.laterality}`;
    if (seen.has(key)) {
      refuse(field, 'twice', `${addOn.label} is there twice.`, 'Leave it once.');
    }
    seen.add(key);
    if ((addOn.per === 'eye') === (wish.laterality === 'OU')) {
      refuse(
        `${field}.laterality`,
        'wrong_laterality',
        `${addOn.label} is priced per ${addOn.per}.`,
        addOn.per === 'eye' ? 'Say which eye it is for.' : 'It belongs to both eyes together.',
      );
    } else if (wish.laterality !== 'OU' && input.eyes[wish.laterality] === null) {
      refuse(
        `${field}.laterality`,
        'eye_not_treated',
        `${addOn.label} is for an eye that is not treated.`,
        `Take it out, or give it to ${otherEye(wish.laterality)}.`,
      );
    }
    return [{ addOn, laterality: wish.laterality }];
  });
}

/** A rule by its id; null when none is asked for, refused when the book does not have it. */
export function find<Rule>(
  rules: ReadonlyMap<string, Rule>,
  id: string | null,
  field: string,
  what: string,
  refuse: Refuse,
): Rule | null {
  if (id === null) return null;
  const rule = rules.get(id);
  if (rule) return rule;
  refuse(field, 'unknown_rule', `The price book has no ${what} "${id}".`, `Choose a ${what} of this book.`);
  return null;
}
