import type { BasisPoints, CurrencyCode, Minor } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';

/** One dated version of what a surgeon is paid. Never changed; a new version is added. */
export interface FeeAgreement {
  readonly feeAgreementId: number;
  readonly versionNo: number;
  readonly effectiveOn: ClinicDate;
  readonly terms: FeeTerms;
}

/** Plain JSON, stored as agreed. */
export interface FeeTerms {
  readonly currency: CurrencyCode;
  readonly basis: FeeBasis;
  /** What an enhancement pays; null pays nothing. */
  readonly enhancement: EnhancementFee | null;
  readonly trigger: FeeTrigger;
  /** The most a month's accruals come to; null for no cap. */
  readonly monthlyCapMinor: Minor | null;
  readonly guarantee: MonthlyGuarantee | null;
  readonly sharedCare: SharedCareTerms | null;
  /** In order of date; the last that is in force counts. Empty: nothing is withheld. */
  readonly withholding: readonly WithholdingRule[];
}

export type FeeBasis =
  /** A sum for each eye by procedure; a procedure without a sum is held until the agreement names it. */
  | { readonly kind: 'per_eye'; readonly byProcedure: Readonly<Record<string, Minor>> }
  /** A rate of what was collected for the eye without tax, less card and lender costs or direct costs where agreed. */
  | {
      readonly kind: 'rate_of_collected';
      readonly rateBp: BasisPoints;
      readonly lessPaymentCosts: boolean;
      readonly lessDirectCosts: boolean;
    }
  /** A sum for each eye by how many were done in the period before it. */
  | {
      readonly kind: 'volume_bands';
      readonly reading: BandReading;
      readonly per: 'month' | 'year';
      readonly bands: readonly VolumeBand[];
    };

/** marginal: each eye by the band it falls in. whole: the band reached pays for every eye of the period. */
export type BandReading = 'marginal' | 'whole';

/** From this eye of the period on (1 is the first), this sum an eye. Bands rise, the first begins at 1. */
export interface VolumeBand {
  readonly fromEye: number;
  readonly perEyeMinor: Minor;
}

export type EnhancementFee =
  | { readonly kind: 'per_eye'; readonly amountMinor: Minor }
  | { readonly kind: 'rate_of_collected'; readonly rateBp: BasisPoints };

/** When a fee is earned: the eye done and its share collected, or the eye done alone. */
export type FeeTrigger = 'done_and_collected' | 'done';

/** A month pays at least this. carried: what was added is taken from later months above it. forgiven: it is not. */
export interface MonthlyGuarantee {
  readonly leastMinor: Minor;
  readonly shortfall: 'carried' | 'forgiven';
}

/** A part of each fee is for the care after surgery and goes by the days somebody cared, out of so many. */
export interface SharedCareTerms {
  readonly careRateBp: BasisPoints;
  readonly days: number;
}

/** Tax kept back from fees and owed to the tax office. */
export interface WithholdingRule {
  readonly from: ClinicDate;
  readonly rateBp: BasisPoints;
  /** Nothing is withheld until a tax year's fees are more than this; null withholds from the first. */
  readonly yearlyThresholdMinor: Minor | null;
  /** Once over the threshold: of the whole year's fees, or of what lies above it. */
  readonly onceOver: 'whole_year' | 'excess';
}

/** The version in force on a day; undefined before the first. Versions may come in any order. */
export function agreementOn(versions: readonly FeeAgreement[], day: ClinicDate): FeeAgreement | undefined {
  return versions
    .filter(({ effectiveOn }) => effectiveOn <= day)
    .reduce<FeeAgreement | undefined>(
      (best, each) => (best && best.effectiveOn >= each.effectiveOn ? best : each),
      undefined,
    );
}

/** What is wrong with terms that somebody is about to agree, by field. Empty means sound. */
export function checkFeeTerms(
  terms: FeeTerms,
): readonly { readonly field: string; readonly words: string }[] {
  const findings: { field: string; words: string }[] = [];
  const rate = (field: string, rateBp: number) => {
    if (!Number.isSafeInteger(rateBp) || rateBp < 0 || rateBp > 10_000)
      findings.push({ field, words: 'A rate lies between 0 and 100 per cent.' });
  };
  const { basis, enhancement, sharedCare, withholding } = terms;
  if (basis.kind === 'rate_of_collected') rate('basis.rateBp', basis.rateBp);
  if (basis.kind === 'volume_bands') {
    const rising = basis.bands.every(({ fromEye }, index) =>
      index === 0 ? fromEye === 1 : fromEye > (basis.bands[index - 1]?.fromEye ?? 0),
    );
    if (basis.bands.length === 0 || !rising)
      findings.push({ field: 'basis.bands', words: 'Bands begin at the first eye and rise.' });
  }
  if (enhancement?.kind === 'rate_of_collected') rate('enhancement.rateBp', enhancement.rateBp);
  if (sharedCare) {
    rate('sharedCare.careRateBp', sharedCare.careRateBp);
    if (!Number.isSafeInteger(sharedCare.days) || sharedCare.days < 1)
      findings.push({ field: 'sharedCare.days', words: 'Care is counted over at least one day.' });
  }
  withholding.forEach(({ rateBp }, index) => {
    rate(`withholding.${index}.rateBp`, rateBp);
  });
  return findings;
}
