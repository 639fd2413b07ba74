import { EYES, type Eye } from '#domain/eye';
import { type CurrencyCode, type MoneyRefusal, parseMoney } from '#domain/money/index';
import { parsePrescriptionFields } from '#domain/prescription/index';
import {
  type ApprovedPlan,
  type CompiledPriceBook,
  type CourseInput,
  type DiscountWish,
  type EyeWish,
  type PriceBook,
  type QuoteResult,
  quoteCourse,
  type Refusal,
} from '#domain/pricing/index';
import type { ClinicDate } from '#domain/time/index';
import type { DiscountDraft, OptionDraft, QuoteDraft } from './draft.ts';
import { parseRate } from './parse-rate.ts';

/** What a price depends on besides the draft and the book; the server's word, never the browser's. */
export interface QuoteFacts {
  readonly quotedOn: ClinicDate;
  readonly approvedPlan: ApprovedPlan | null;
}

export type OptionInput =
  | { readonly ok: true; readonly input: CourseInput }
  | { readonly ok: false; readonly refusals: readonly Refusal[] };

/**
 * One option of a draft as the engine's input. Refusals carry the engine's own field names ("eyes.OD.prescription.axis",
 * "discounts.0.off"), so that a form shows both kinds in the same places.
 */
export function optionInput(
  draft: QuoteDraft,
  option: OptionDraft,
  facts: QuoteFacts,
  book: PriceBook,
): OptionInput {
  const refusals: Refusal[] = [];
  const eyes = Object.fromEntries(EYES.map((eye) => [eye, eyeWish(draft, option, eye, refusals)]));
  const discounts = option.discounts.flatMap((discount, index) =>
    discountWish(discount, index, book, refusals),
  );
  if (refusals.length > 0) return { ok: false, refusals };
  return {
    ok: true,
    input: {
      quotedOn: facts.quotedOn,
      acceptedOn: null,
      priceListId: option.priceListId,
      eyes: { OD: eyes.OD ?? null, OS: eyes.OS ?? null },
      surgery: option.surgery,
      approvedPlan: facts.approvedPlan,
      addOns: option.addOns,
      packageId: option.packageId,
      discounts,
      paymentPlanId: option.paymentPlanId,
    },
  };
}

/** Prices one option of a draft, or says what to change. */
export function priceOption(
  draft: QuoteDraft,
  option: OptionDraft,
  facts: QuoteFacts,
  compiled: CompiledPriceBook,
): QuoteResult {
  const read = optionInput(draft, option, facts, compiled.book);
  return read.ok ? quoteCourse(read.input, compiled) : read;
}

function eyeWish(draft: QuoteDraft, option: OptionDraft, eye: Eye, refusals: Refusal[]): EyeWish | null {
  const procedureId = option.procedures[eye];
  if (procedureId === null) return null;
  const read = parsePrescriptionFields(draft.prescriptions[eye]);
  if (read.ok) return { procedureId, prescription: read.prescription, coverId: option.covers[eye] };
  for (const { field, words, change } of read.refusals) {
    refusals.push({ field: `eyes.${eye}.prescription.${field}`, code: 'prescription', words, change });
  }
  return null;
}

function discountWish(
  { discountId, size }: DiscountDraft,
  index: number,
  book: PriceBook,
  refusals: Refusal[],
): DiscountWish[] {
  const rule = book.discounts.find((each) => each.id === discountId);
  const refuse = (words: string, change: string): DiscountWish[] => {
    refusals.push({ field: `discounts.${index}.off`, code: 'discount_kind', words, change });
    return [];
  };
  if (rule?.off.kind === 'rate') {
    const rateBp = parseRate(size);
    return rateBp === null
      ? refuse(
          size.trim() === '' ? 'How much?' : `"${size}" is not a rate.`,
          'Write per cent, such as 4 or 2.5.',
        )
      : [{ discountId, off: { kind: 'rate', rateBp } }];
  }
  const read = parseMoney(size, book.currency);
  return read.ok
    ? [{ discountId, off: { kind: 'amount', amountMinor: read.amount } }]
    : refuse(moneyWords(read.why, size, book.currency), 'Write an amount, such as 120 or 120.00.');
}

function moneyWords(why: MoneyRefusal, size: string, currency: CurrencyCode): string {
  if (why === 'empty') return 'How much?';
  if (why === 'too_many_decimals') return `"${size}" has more decimals than ${currency}.`;
  return `"${size}" is not an amount.`;
}
