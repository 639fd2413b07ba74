import type { Eye } from '#domain/eye';
import type { PrescriptionFields } from '#domain/prescription/index';
import type { AddOnWish, PriceBook, SurgeryPlan } from '#domain/pricing/index';

/**
 * A quote while it is being written: what people typed, as they typed it, so that nothing is lost by saving early.
 * Browser and server turn it into the engine's input by the same function (see draft-input.ts).
 */
export interface QuoteDraft {
  readonly prescriptions: Readonly<Record<Eye, PrescriptionFields>>;
  /** One to three, side by side. */
  readonly options: readonly OptionDraft[];
}

export interface OptionDraft {
  /** What tells the options apart, where somebody gave it a name; else optionWords says it. */
  readonly label: string;
  /** null: this eye is not treated. */
  readonly procedures: Readonly<Record<Eye, string | null>>;
  readonly covers: Readonly<Record<Eye, string | null>>;
  readonly surgery: SurgeryPlan;
  readonly priceListId: string | null;
  readonly packageId: string | null;
  readonly addOns: readonly AddOnWish[];
  readonly discounts: readonly DiscountDraft[];
  readonly paymentPlanId: string | null;
}

export interface DiscountDraft {
  readonly discountId: string;
  /** As typed: "4", "4.5 %" or "120.00". */
  readonly size: string;
}

export const MOST_OPTIONS = 3;

/** The letter an option goes by: A, B, C. */
export function optionLetter(index: number): string {
  return String.fromCharCode(65 + index);
}

/** What an option is called: its own name, else its package, else the eyes and days: "Both eyes on one day", "Right eye". */
export function optionWords(option: OptionDraft, book: Pick<PriceBook, 'packages'>): string {
  const named = option.label.trim();
  if (named !== '') return named;
  const packaged = book.packages.find((each) => each.id === option.packageId);
  if (packaged) return packaged.label;
  const { OD, OS } = option.procedures;
  if (OD === null) return OS === null ? 'Nothing chosen yet' : 'Left eye';
  if (OS === null) return 'Right eye';
  return option.surgery.plan === 'staged' ? 'One eye after the other' : 'Both eyes on one day';
}

const NOTHING: PrescriptionFields = { sphere: '', cylinder: '', axis: '', vertex: '' };

/** A draft to begin with: what is known of the eyes, the procedures the plan names first, both eyes on one day. */
export function newDraft(known: {
  readonly prescriptions: Readonly<Partial<Record<Eye, PrescriptionFields>>>;
  readonly approved: Readonly<Record<Eye, readonly string[]>> | undefined;
  readonly priceListId: string | null;
  readonly book: PriceBook;
}): QuoteDraft {
  const { approved, book } = known;
  const procedure = (eye: Eye) =>
    approved?.[eye].find((id) => book.procedures.some((each) => each.id === id)) ?? null;
  const listed = book.priceLists.some((list) => list.id === known.priceListId);
  return {
    prescriptions: { OD: known.prescriptions.OD ?? NOTHING, OS: known.prescriptions.OS ?? NOTHING },
    options: [
      {
        label: '',
        procedures: { OD: procedure('OD'), OS: procedure('OS') },
        covers: { OD: null, OS: null },
        surgery: { plan: 'same_session', on: null },
        priceListId: listed ? known.priceListId : null,
        packageId: null,
        addOns: [],
        discounts: [],
        paymentPlanId: null,
      },
    ],
  };
}
