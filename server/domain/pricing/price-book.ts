import type { CurrencyCode, Minor } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';

/**
 * One version of a clinic's prices: plain JSON, immutable once used.
 * It holds what a patient may know; what things cost the clinic stands in a `CostBook` (see costs.ts).
 * Every rule has an `id` that is unique in the book and never reused for something else in a later version.
 */
export interface PriceBook {
  readonly id: string;
  readonly version: number;
  readonly inForceFrom: ClinicDate;
  readonly currency: CurrencyCode;
  readonly taxClasses: readonly TaxClass[];
  readonly procedures: readonly Procedure[];
  readonly bands: readonly Band[];
  readonly secondEye: readonly SecondEyeRule[];
  readonly followUps: readonly FollowUpSchedule[];
  readonly covers: readonly EnhancementCover[];
  readonly addOns: readonly AddOn[];
  readonly packages: readonly Package[];
  readonly priceLists: readonly PriceList[];
  readonly discounts: readonly Discount[];
  readonly deposit: DepositRule;
  /** The balance is due this many days before the surgery it is for. */
  readonly balanceDueDays: number;
  readonly paymentPlans: readonly PaymentPlan[];
  readonly cancellation: CancellationLadder;
  /** A quote holds for this many days, the day of issue being the first. */
  readonly validityDays: number;
  /** Policy B allocates by relative stand-alone price, policy A recognises everything at each eye's surgery. */
  readonly allocationPolicy: 'A' | 'B';
  /** What no price of this book includes, in the patient's words. */
  readonly notIncluded: readonly string[];
}

/** A tax treatment. Rates are basis points, the one in force on the date the class goes by counts. */
export interface TaxClass {
  readonly id: string;
  readonly label: string;
  readonly treatment: 'exempt' | 'taxed';
  /** Required for an exempt class: the reason printed on documents. */
  readonly exemptionReason: string | null;
  readonly stated: 'included' | 'excluded';
  /** Which date decides the rate. A supply not yet dated goes by the date of the quote. */
  readonly goesBy: 'surgery' | 'quote';
  readonly rates: readonly DatedRate[];
}

export interface DatedRate {
  readonly from: ClinicDate;
  readonly rateBp: number;
}

/** Money, or a rate of something named where it is used. */
export type Charge =
  | { readonly kind: 'amount'; readonly amountMinor: Minor }
  | { readonly kind: 'rate'; readonly rateBp: number };

/** Surgery of one eye. */
export interface Procedure {
  readonly id: string;
  readonly label: string;
  readonly priceMinor: Minor;
  readonly standAloneMinor: Minor;
  readonly taxClassId: string;
  readonly followUpId: string | null;
}

/**
 * A surcharge per eye by the size of the strongest meridian or of the cylinder, in milli-dioptres of the minus form.
 * Each edge says whether it belongs to the band. A rate is of the procedure's price.
 */
export interface Band {
  readonly id: string;
  readonly label: string;
  readonly measure: 'meridian' | 'cylinder';
  readonly procedureIds: readonly string[];
  readonly fromMd: number;
  readonly fromIncluded: boolean;
  /** null: no upper edge. */
  readonly toMd: number | null;
  readonly toIncluded: boolean;
  readonly charge: Charge;
  /** Add-ons per eye that this band makes necessary. */
  readonly requiresAddOnIds: readonly string[];
}

/**
 * What comes off the second eye of a pair of procedures (either order). In one session the second eye is the one
 * with the lower procedure price, when staged the one with the later date. A rate is of that eye's procedure price.
 */
export interface SecondEyeRule {
  readonly id: string;
  readonly label: string;
  readonly procedureIds: readonly [string, string];
  readonly sameSession: Charge | null;
  readonly staged: { readonly withinDays: number; readonly off: Charge } | null;
  /** What happens to the first eye's price if the second eye never happens; a book in force must say it. */
  readonly ifNever: SecondEyeFallback | null;
}

export type SecondEyeFallback =
  | { readonly kind: 'first_eye_keeps_its_price' }
  | { readonly kind: 'supplement'; readonly amountMinor: Minor };

/** The visits after surgery, priced once per course or once per eye. */
export interface FollowUpSchedule {
  readonly id: string;
  readonly label: string;
  readonly per: 'course' | 'eye';
  readonly priceMinor: Minor;
  readonly standAloneMinor: Minor;
  readonly taxClassId: string;
  readonly visits: readonly FollowUpVisit[];
}

/** A visit due some days after surgery, give or take a window. */
export interface FollowUpVisit {
  readonly label: string;
  readonly afterDays: number;
  readonly windowDays: number;
}

/** A later touch-up that is included for a time. Months count from each eye's surgery. */
export interface EnhancementCover {
  readonly id: string;
  readonly label: string;
  readonly months: number;
  readonly earliestMonth: number;
  readonly countPerEye: number;
  readonly thresholdMd: number;
  readonly thresholdOf: 'spherical_equivalent' | 'cylinder' | 'either';
  /** null: no examination needed; else no longer gap than this between examinations. */
  readonly examinationEveryMonths: number | null;
  readonly priceMinor: Minor;
  readonly standAloneMinor: Minor;
  readonly taxClassId: string;
  /** Price of an enhancement out of cover; a book in force must say it. */
  readonly priceOutOfCoverMinor: Minor | null;
  /** Whether the patient's price list and rate discounts also lower the price out of cover. */
  readonly carriesDiscount: boolean;
}

/** Anything added to the course. What the line is for decides where its income is recognised. */
export interface AddOn {
  readonly id: string;
  readonly label: string;
  readonly per: 'eye' | 'session' | 'course';
  readonly priceMinor: Minor;
  readonly standAloneMinor: Minor;
  readonly taxClassId: string;
  /** 'surgery' (only per eye) is recognised with that eye's surgery. */
  readonly purpose: 'assessment' | 'surgery' | 'goods' | 'service';
}

/** A bundle at a fixed price or at a rate off the sum of its parts. */
export interface Package {
  readonly id: string;
  readonly label: string;
  readonly eyes: 'one' | 'both';
  readonly procedureIds: readonly string[];
  readonly price: Charge;
  /** Tax class of the one line of a fixed price; parts at a rate keep their own. */
  readonly taxClassId: string;
  readonly includes: {
    readonly bands: boolean;
    readonly aftercare: boolean;
    readonly addOnIds: readonly string[];
    readonly coverId: string | null;
  };
  /** In the patient's words. */
  readonly included: readonly string[];
  readonly notIncluded: readonly string[];
  /** Unless true, whoever takes the package never pays more than its parts. */
  readonly mayCostMore: boolean;
}

/** Prices for a class of patients, such as an employer's staff or a referrer's patients. */
export interface PriceList {
  readonly id: string;
  readonly label: string;
  /** What the desk must have seen, in a few words ("badge seen"); null where nothing is asked. */
  readonly evidence: string | null;
  readonly rule:
    | { readonly kind: 'rate'; readonly rateBp: number; readonly scope: Scope }
    | { readonly kind: 'prices'; readonly prices: Readonly<Record<string, Minor>> };
  readonly combinesWithDiscounts: boolean;
}

/** Which lines a rate comes off: all, surgery (procedures, bands, package) or named rules. */
export type Scope = 'everything' | 'surgery' | { readonly ruleIds: readonly string[] };

/**
 * Something off, with its reason. Of one stacking group a course takes one. The counsellor gives up to the own limit,
 * beyond it another person approves, beyond the approver's limit nobody.
 * An amount always comes off the surgery lines, so that adding something never moves it.
 */
export interface Discount {
  readonly id: string;
  readonly reason: string;
  readonly off:
    | {
        readonly kind: 'rate';
        readonly scope: Scope;
        readonly ownLimitBp: number;
        readonly approverLimitBp: number;
      }
    | { readonly kind: 'amount'; readonly ownLimitMinor: Minor; readonly approverLimitMinor: Minor };
  readonly stackingGroup: string;
  /** Not null: whoever takes the discount has this aftercare and cover instead; both consequences show. */
  readonly aftercare: {
    readonly followUpId: string | null;
    readonly coverId: string | null;
    readonly words: string;
  } | null;
}

/** What is paid to accept: rate or amount of the price, not under the floor, not over the ceiling or the price. */
export interface DepositRule {
  readonly id: string;
  readonly charge: Charge;
  readonly floorMinor: Minor | null;
  readonly ceilingMinor: Minor | null;
}

/** Ways of paying other than deposit and balance. Instalments are monthly, the first a month after acceptance. */
export type PaymentPlan =
  | {
      readonly kind: 'interest_free';
      readonly id: string;
      readonly label: string;
      readonly instalments: number;
      readonly takesDeposit: boolean;
      readonly leastMinor: Minor;
    }
  | {
      readonly kind: 'fee_bearing';
      readonly id: string;
      readonly label: string;
      readonly instalments: number;
      readonly takesDeposit: boolean;
      readonly leastMinor: Minor;
      /** Nominal yearly rate, a twelfth a month. */
      readonly rateBp: number;
      readonly taxClassId: string;
    }
  | {
      readonly kind: 'lender';
      readonly id: string;
      readonly label: string;
      readonly instalments: number;
      readonly takesDeposit: boolean;
      readonly leastMinor: Minor;
      /** Nominal yearly rate the lender charges the patient; 0 where the clinic bears it. */
      readonly rateBp: number;
    };

/**
 * What the clinic keeps when plans change. Amounts and rates are per eye; a rate is of that eye's share of the price.
 * Found unsuitable, or cancelled by the clinic: nothing is kept, always.
 */
export interface CancellationLadder {
  readonly id: string;
  /** Days after acceptance in which everything comes back. */
  readonly reflectionDays: number;
  /** From the rung with the most days down; the last has 0 days. */
  readonly rungs: readonly LadderRung[];
  readonly noShow: Charge;
  readonly reschedule: { readonly freeMoves: number; readonly fee: Charge };
}

/** Applies while the surgery is at least this many days away (and the rung above does not). */
export interface LadderRung {
  readonly id: string;
  readonly minDaysBefore: number;
  readonly kept: Charge;
}
