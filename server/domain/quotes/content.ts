import type { CourseInput, PricedCourse } from '#domain/pricing/index';
import type { ClinicDate } from '#domain/time/index';
import type { QuoteDraft } from './draft.ts';

/** What a version of a quote froze when it was issued: never changed again (invariant 15). */
export interface QuoteContent {
  readonly patient: {
    readonly givenName: string;
    readonly familyName: string;
    readonly bornOn: ClinicDate;
  };
  /** The surgeon of the approved plan; null on an estimate nobody has approved. */
  readonly surgeonUserId: number | null;
  readonly surgeonName: string | null;
  readonly approvedPlanId: number | null;
  readonly options: readonly QuoteOption[];
  /** The draft it was made from, to see whether the draft has moved on since. */
  readonly draft: QuoteDraft;
}

export interface QuoteOption {
  readonly label: string;
  readonly input: CourseInput;
  readonly priced: PricedCourse;
  /** SHA-256 of the engine's content key: input, version of the book, version of the engine. */
  readonly contentHash: string;
}
