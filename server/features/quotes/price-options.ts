import { createHash } from 'node:crypto';
import {
  type ApprovedPlan,
  type CourseInput,
  compilePriceBook,
  contentKey,
  type PriceBook,
  type PricedCourse,
  quoteCourse,
  type Refusal,
} from '#domain/pricing/index';
import {
  type OptionDraft,
  optionInput,
  optionWords,
  type QuoteDraft,
  type QuoteFacts,
} from '#domain/quotes/index';
import type { ClinicDate } from '#domain/time/index';
import { newestPlan, type PlanRow } from '#server/features/patients/index';
import type { Db, Trx } from '#server/platform/db';
import { type FieldError, Problem } from '#server/platform/problem';

/** One option of a draft after the server's engine has had it. */
export type PricedOption =
  | {
      readonly ok: true;
      readonly label: string;
      readonly input: CourseInput;
      readonly priced: PricedCourse;
      readonly contentHash: string;
    }
  | { readonly ok: false; readonly label: string; readonly refusals: readonly Refusal[] };

export type AgreedOption = Extract<PricedOption, { ok: true }>;

/**
 * Every option priced.
 * @throws Problem refused 'cannot_be_priced' with every refusal of every option at its field
 */
export function mustBePriced(options: readonly PricedOption[]): AgreedOption[] {
  const fields: FieldError[] = options.flatMap((option, index) =>
    option.ok
      ? []
      : option.refusals.map(({ field, words, change }) => ({
          field: `options.${index}.${field}`,
          message: `${words} ${change}`,
        })),
  );
  if (fields.length > 0) {
    throw new Problem('refused', {
      reason: 'cannot_be_priced',
      detail: `${fields.length === 1 ? 'One thing' : `${fields.length} things`} must be put right before this can be sent. The draft is kept.`,
      fields,
    });
  }
  return options.filter((option) => option.ok);
}

/** Prices every option of a draft with the same engine the browser has; the facts are the server's own. */
export function priceOptions(draft: QuoteDraft, facts: QuoteFacts, book: PriceBook): PricedOption[] {
  const compiled = compilePriceBook(book);
  return draft.options.map((option: OptionDraft): PricedOption => {
    const label = optionWords(option, book);
    const read = optionInput(draft, option, facts, book);
    if (!read.ok) return { ok: false, label, refusals: read.refusals };
    const result = quoteCourse(read.input, compiled);
    if (!result.ok) return { ok: false, label, refusals: result.refusals };
    const contentHash = contentHashOf(read.input, book);
    return { ok: true, label, input: read.input, priced: result.course, contentHash };
  });
}

/** SHA-256 of input, version of the book and version of the engine: the same hash, the same course (invariant 13). */
export function contentHashOf(input: CourseInput, book: PriceBook): string {
  return createHash('sha256').update(contentKey(input, book)).digest('hex');
}

/** What the server knows of a patient's quote on a day. */
export async function quoteFacts(
  trx: Db | Trx,
  patientId: number,
  today: ClinicDate,
): Promise<{ readonly facts: QuoteFacts; readonly plan: PlanRow | undefined }> {
  const plan = await newestPlan(trx, patientId);
  return { facts: { quotedOn: today, approvedPlan: plan ? approvedPlan(plan) : null }, plan };
}

/** A surgeon's plan as the engine takes it. */
export function approvedPlan(plan: PlanRow): ApprovedPlan {
  return {
    approvedBy: plan.surgeonName,
    approvedOn: plan.approvedOn,
    expiresOn: plan.expiresOn,
    procedureIds: { OD: [...plan.procedureIds.OD], OS: [...plan.procedureIds.OS] },
  };
}
