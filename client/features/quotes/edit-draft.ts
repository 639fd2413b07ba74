import type { Eye, Laterality } from '#domain/eye';
import type { PrescriptionFields } from '#domain/prescription/index';
import { MOST_OPTIONS, type OptionDraft, type QuoteDraft } from '#domain/quotes/index';
import type { ClinicDate } from '#domain/time/index';

/** Every change a hand can make to a draft, as functions from draft to draft. */

export function typePrescription(
  draft: QuoteDraft,
  eye: Eye,
  field: keyof PrescriptionFields,
  text: string,
): QuoteDraft {
  const fields = { ...draft.prescriptions[eye], [field]: text };
  return { ...draft, prescriptions: { ...draft.prescriptions, [eye]: fields } };
}

export function changeOption(draft: QuoteDraft, index: number, change: Partial<OptionDraft>): QuoteDraft {
  const options = draft.options.map((option, at) => (at === index ? { ...option, ...change } : option));
  return { ...draft, options };
}

/** Adds an option beside the others: a copy of the one being looked at, to be changed. */
export function addOption(draft: QuoteDraft, from: number): QuoteDraft {
  const source = draft.options[from];
  if (!source || draft.options.length >= MOST_OPTIONS) return draft;
  return { ...draft, options: [...draft.options, { ...source, label: '' }] };
}

export function removeOption(draft: QuoteDraft, index: number): QuoteDraft {
  if (draft.options.length < 2) return draft;
  return { ...draft, options: draft.options.filter((_, at) => at !== index) };
}

/** Leaving an eye out takes its own add-ons and cover with it. */
export function chooseProcedure(option: OptionDraft, eye: Eye, procedureId: string | null): OptionDraft {
  const procedures = { ...option.procedures, [eye]: procedureId };
  if (procedureId !== null) return { ...option, procedures };
  return {
    ...option,
    procedures,
    covers: { ...option.covers, [eye]: null },
    addOns: option.addOns.filter((addOn) => addOn.laterality !== eye),
  };
}

/** Same day or staged; a day already chosen is kept for the first eye. */
export function choosePlan(option: OptionDraft, plan: 'same_session' | 'staged'): OptionDraft {
  const { surgery } = option;
  if (surgery.plan === plan) return option;
  return surgery.plan === 'staged'
    ? { ...option, surgery: { plan: 'same_session', on: surgery.on.OD ?? surgery.on.OS } }
    : { ...option, surgery: { plan: 'staged', on: { OD: surgery.on, OS: null } } };
}

export function chooseDay(option: OptionDraft, eye: Eye | 'both', on: ClinicDate | null): OptionDraft {
  const { surgery } = option;
  if (surgery.plan === 'same_session') return { ...option, surgery: { ...surgery, on } };
  if (eye === 'both') return { ...option, surgery: { ...surgery, on: { OD: on, OS: on } } };
  return { ...option, surgery: { ...surgery, on: { ...surgery.on, [eye]: on } } };
}

export function toggleAddOn(
  option: OptionDraft,
  addOnId: string,
  laterality: Laterality,
  wanted: boolean,
): OptionDraft {
  const others = option.addOns.filter(
    (addOn) => addOn.addOnId !== addOnId || addOn.laterality !== laterality,
  );
  return { ...option, addOns: wanted ? [...others, { addOnId, laterality }] : others };
}

export function hasAddOn(option: OptionDraft, addOnId: string, laterality: Laterality): boolean {
  return option.addOns.some((addOn) => addOn.addOnId === addOnId && addOn.laterality === laterality);
}

export function sizeDiscount(option: OptionDraft, index: number, size: string): OptionDraft {
  const discounts = option.discounts.map((discount, at) => (at === index ? { ...discount, size } : discount));
  return { ...option, discounts };
}
