import type { Eye, Laterality } from '#domain/eye';
import type { CurrencyCode, Minor } from '#domain/money/index';
import type { Prescription } from '#domain/prescription/index';
import type { ClinicDate } from '#domain/time/index';
import type { Step } from './explain.ts';

/** What is asked of the engine. Plain JSON; everything the price depends on besides the book. */
export interface CourseInput {
  readonly quotedOn: ClinicDate;
  /** Dates count from here; null while nobody has accepted (then as if accepted on the day of the quote). */
  readonly acceptedOn: ClinicDate | null;
  /** A price list of the book; null for the standard prices. */
  readonly priceListId: string | null;
  readonly eyes: { readonly OD: EyeWish | null; readonly OS: EyeWish | null };
  readonly surgery: SurgeryPlan;
  readonly approvedPlan: ApprovedPlan | null;
  readonly addOns: readonly AddOnWish[];
  readonly packageId: string | null;
  readonly discounts: readonly DiscountWish[];
  /** null: deposit and balance. */
  readonly paymentPlanId: string | null;
}

/** One eye that is to be treated. */
export interface EyeWish {
  readonly procedureId: string;
  readonly prescription: Prescription;
  readonly coverId: string | null;
}

/** Same session: one day for what is treated, null while no day is agreed. Staged: a day for each eye. */
export type SurgeryPlan =
  | { readonly plan: 'same_session'; readonly on: ClinicDate | null }
  | {
      readonly plan: 'staged';
      readonly on: { readonly OD: ClinicDate | null; readonly OS: ClinicDate | null };
    };

/** The surgeon's word: which procedures may be quoted for each eye, and until when. */
export interface ApprovedPlan {
  readonly approvedBy: string;
  readonly approvedOn: ClinicDate;
  readonly expiresOn: ClinicDate;
  readonly procedureIds: { readonly OD: readonly string[]; readonly OS: readonly string[] };
}

/** 'OU' for an add-on per session or per course. */
export interface AddOnWish {
  readonly addOnId: string;
  readonly laterality: Laterality;
}

export interface DiscountWish {
  readonly discountId: string;
  readonly off:
    | { readonly kind: 'rate'; readonly rateBp: number }
    | { readonly kind: 'amount'; readonly amountMinor: Minor };
}

/** Why a course cannot be priced: the field of the input, what is wrong, what to change. */
export interface Refusal {
  /** Path into the input, such as "eyes.OD.prescription.axis" or "discounts.0". */
  readonly field: string;
  readonly code: RefusalCode;
  readonly words: string;
  readonly change: string;
}

export type RefusalCode =
  | 'no_eye'
  | 'prescription'
  | 'unknown_rule'
  | 'not_approved'
  | 'dates_needed'
  | 'date_in_the_past'
  | 'no_band'
  | 'no_tax_rate'
  | 'wrong_laterality'
  | 'eye_not_treated'
  | 'twice'
  | 'package_does_not_fit'
  | 'discounts_do_not_combine'
  | 'discount_kind'
  | 'discount_over_limit'
  | 'plan_needs_more'
  | 'book_incomplete';

export type QuoteResult =
  | { readonly ok: true; readonly course: PricedCourse }
  | { readonly ok: false; readonly refusals: readonly Refusal[] };

export type LineKind =
  | 'procedure'
  | 'band'
  | 'second_eye'
  | 'add_on'
  | 'aftercare'
  | 'cover'
  | 'package'
  | 'package_rate'
  | 'price_list'
  | 'discount'
  | 'instalment_charge'
  | 'tax';

/** One figure of the quote. Lines with the same `row` stand in one row of the table, in the column of their laterality. */
export interface QuoteLine {
  /** Unique in the course: row and laterality. */
  readonly id: string;
  readonly row: string;
  readonly kind: LineKind;
  readonly ruleId: string;
  /** Line of the rule in the book, from 1. */
  readonly ruleLine: number;
  /** Name of the row: "Surgery", "Cylinder 1.50 and over". */
  readonly label: string;
  /** What is particular to this line: the procedure's name, "needed with this cylinder", "4 %, badge seen". */
  readonly detail: string | null;
  readonly laterality: Laterality;
  readonly amountMinor: Minor;
  /** null on the lines that carry tax itself. */
  readonly taxClassId: string | null;
  readonly why: readonly Step[];
}

/** Tax of one class at one rate over the course. gross = net + tax. */
export interface TaxTotal {
  readonly taxClassId: string;
  readonly label: string;
  readonly treatment: 'exempt' | 'taxed';
  readonly stated: 'included' | 'excluded';
  readonly exemptionReason: string | null;
  readonly rateBp: number;
  readonly netMinor: Minor;
  readonly taxMinor: Minor;
  readonly grossMinor: Minor;
}

export type ByColumn = { readonly OD: Minor; readonly OS: Minor; readonly OU: Minor };

/** A sum that falls due. */
export interface Due {
  readonly id: string;
  readonly kind: 'deposit' | 'balance' | 'instalment' | 'lender';
  /** "On accepting", "Balance", "Instalment 3 of 12". */
  readonly label: string;
  /** How it was worked out or when: "deposit, 10 %", "7 days before surgery". */
  readonly detail: string;
  /** null while the surgery has no day. */
  readonly dueOn: ClinicDate | null;
  readonly amountMinor: Minor;
  readonly from: 'patient' | 'lender';
}

/** What paying over time costs, for the patient to compare. */
export interface CreditTerms {
  readonly planId: string;
  readonly label: string;
  readonly kind: 'interest_free' | 'fee_bearing' | 'lender';
  readonly creditMinor: Minor;
  readonly chargeMinor: Minor;
  readonly payableMinor: Minor;
  readonly nominalRateBp: number;
  /** Annual percentage rate by Directive 2008/48/EC, months of a twelfth, basis points. */
  readonly aprBp: number;
  readonly instalments: readonly { readonly dueOn: ClinicDate; readonly amountMinor: Minor }[];
}

export type ObligationKind =
  | 'assessment'
  | 'surgery'
  | 'aftercare'
  | 'enhancement'
  | 'goods'
  | 'service'
  | 'instalment_charge';

/** Something promised, its stand-alone price and its part of the price without tax. Parts are delivered one by one. */
export interface Obligation {
  /** "surgery:OD", "aftercare", "enhancement", "goods:<rule>" … */
  readonly id: string;
  readonly kind: ObligationKind;
  readonly label: string;
  readonly laterality: Laterality;
  readonly standAloneMinor: Minor;
  readonly allocatedMinor: Minor;
  readonly parts: readonly ObligationPart[];
}

export interface ObligationPart {
  readonly id: string;
  readonly label: string;
  readonly laterality: Laterality;
  readonly amountMinor: Minor;
}

/** One row of "if it is cancelled". `until` is the last day the row holds. */
export interface CancellationRow {
  readonly event: 'reflection' | 'cancels' | 'no_show' | 'unsuitable' | 'clinic_cancels' | 'moves';
  /** null: any day, or no day is agreed yet (then `detail` says the days before surgery). */
  readonly until: ClinicDate | null;
  readonly label: string;
  readonly detail: string;
  readonly keptMinor: Minor;
  /** What the schedule has asked for before that day; null where it does not matter. */
  readonly paidMinor: Minor | null;
  /** null: everything paid. */
  readonly comesBackMinor: Minor | null;
}

/** Enhancement cover of one eye. */
export interface CoverTerms {
  readonly eye: Eye;
  readonly coverId: string;
  readonly label: string;
  readonly months: number;
  readonly earliestMonth: number;
  readonly from: ClinicDate | null;
  readonly until: ClinicDate | null;
  readonly count: number;
  readonly thresholdMd: number;
  readonly thresholdOf: 'spherical_equivalent' | 'cylinder' | 'either';
  readonly examinationEveryMonths: number | null;
  readonly priceOutOfCoverMinor: Minor;
  readonly conditions: readonly string[];
}

/** Something the price includes, for the patient's list. */
export interface Included {
  readonly ruleId: string;
  readonly label: string;
}

export interface ApprovalNeeded {
  readonly discountId: string;
  readonly reason: string;
  readonly asked: string;
  readonly ownLimit: string;
  readonly approverLimit: string;
}

/** A package held against its parts. */
export interface PackageComparison {
  readonly packageId: string;
  readonly label: string;
  readonly partsMinor: Minor;
  readonly priceMinor: Minor;
  /** Parts less price; negative only where the book lets a package cost more. */
  readonly savesMinor: Minor;
  /** True where the parts were no dearer and are what is charged. */
  readonly chargedAsParts: boolean;
}

export interface Warning {
  readonly code: WarningCode;
  readonly words: string;
  readonly eye: Eye | null;
}

export type WarningCode =
  | 'estimate'
  | 'plan_expired'
  | 'plan_expires_before_surgery'
  | 'no_surgery_day'
  | 'second_eye_reduction_missed'
  | 'second_eye_condition'
  | 'package_no_cheaper'
  | 'aftercare_changed'
  | 'approval_needed'
  | 'evidence_needed'
  | 'not_interest_free_exempt';

/** A course with every figure and the reason for it. Plain JSON; the same input, book and engine give the same bytes. */
export interface PricedCourse {
  readonly engine: string;
  readonly book: { readonly id: string; readonly version: number; readonly inForceFrom: ClinicDate };
  readonly currency: CurrencyCode;
  /** An estimate cannot be accepted: the surgeon has not approved (or no longer approves) what it names. */
  readonly standing: 'quotable' | 'estimate';
  readonly quotedOn: ClinicDate;
  readonly validUntil: ClinicDate;
  readonly lines: readonly QuoteLine[];
  /** What stands in each column of the table; adds up to the total. */
  readonly columns: ByColumn;
  /** The columns with a package's price shared out to the eyes: what each eye is worth to ladder and schedule. */
  readonly shares: ByColumn;
  readonly taxes: readonly TaxTotal[];
  readonly netMinor: Minor;
  readonly taxMinor: Minor;
  readonly totalMinor: Minor;
  readonly depositMinor: Minor;
  readonly schedule: readonly Due[];
  readonly credit: CreditTerms | null;
  readonly obligations: readonly Obligation[];
  readonly cancellation: readonly CancellationRow[];
  readonly cover: readonly CoverTerms[];
  readonly included: readonly Included[];
  readonly notIncluded: readonly string[];
  readonly package: PackageComparison | null;
  readonly approvals: readonly ApprovalNeeded[];
  readonly warnings: readonly Warning[];
}
