import { sum } from '#domain/money/index';
import type { DiscountWish } from '#domain/pricing/index';
import { type ApprovalKind, approvedPayload, askApproval } from '#server/features/approvals/index';
import { todayAt } from '#server/features/business-days/index';
import { bookInForce } from '#server/features/catalogue/index';
import type { StaffActor } from '#server/platform/actor';
import type { Db, Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { type AgreedOption, mustBePriced, priceOptions, quoteFacts } from './price-options.ts';
import { mustBeNewest, quoteToWrite } from './save-draft.ts';

const KIND = 'quote_discount';

interface Payload {
  readonly discounts: readonly DiscountWish[];
}

/** Discounts over the counsellor's limit: a manager who did not ask decides; then the quote can be issued by hand. */
export const discountApproval: ApprovalKind = {
  kind: KIND,
  decidedBy: ['manager'],
  onApproved: async () => {},
};

/**
 * Asks a second person to agree to the discounts of a saved draft that are over the limit.
 * @throws Problem refused 'nothing_to_approve', 'cannot_be_priced', conflict 'draft_changed', 'already_asked'
 */
export async function askDiscountApproval(
  deps: Deps,
  quoteId: number,
  asked: { readonly draftVersion: number; readonly reason: string },
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const quote = await quoteToWrite(trx, quoteId, actor);
    mustBeNewest(quote, asked.draftVersion);
    if (quote.draft === null || quote.state === 'accepted' || quote.state === 'withdrawn')
      throw refused('quote_is_closed', `This quote is ${quote.state}.`);
    const today = await todayAt(trx, deps, quote.siteId);
    const { book } = await bookInForce(trx, quote.siteId, today);
    const { facts } = await quoteFacts(trx, quote.patientId, today);
    const options = mustBePriced(priceOptions(quote.draft, facts, book));
    const over = options.flatMap(discountsOver);
    if (over.length === 0)
      throw refused('nothing_to_approve', 'Every discount of this draft is within your own limit.');
    const payload: Payload = { discounts: over };
    await askApproval(trx, deps, {
      kind: KIND,
      subjectType: 'quote',
      subjectId: quoteId,
      siteId: quote.siteId,
      amountMinor: sum(options.flatMap(discountLines)),
      reason: asked.reason,
      payload,
      actor,
    });
  });
}

function discountsOver({ input, priced }: AgreedOption): DiscountWish[] {
  const ids = priced.approvals.map((approval) => approval.discountId);
  return input.discounts.filter((discount) => ids.includes(discount.discountId));
}

function discountLines({ priced }: AgreedOption) {
  const ids = priced.approvals.map((approval) => approval.discountId);
  return priced.lines.filter((line) => ids.includes(line.ruleId)).map((line) => line.amountMinor);
}

/** Discounts of an option that are over the limit and that nobody has agreed to, to this size or more. */
export async function discountsNotAgreed(
  trx: Trx | Db,
  quoteId: number,
  option: AgreedOption,
): Promise<AgreedOption['priced']['approvals']> {
  if (option.priced.approvals.length === 0) return [];
  const agreed = (await approvedPayload(trx, KIND, 'quote', quoteId)) as Payload | undefined;
  return option.priced.approvals.filter(({ discountId }) => {
    const wish = option.input.discounts.find((discount) => discount.discountId === discountId);
    return !wish || !agreed?.discounts.some((given) => covers(given, wish));
  });
}

function covers(given: DiscountWish, wish: DiscountWish): boolean {
  return (
    given.discountId === wish.discountId && given.off.kind === wish.off.kind && sizeOf(given) >= sizeOf(wish)
  );
}

function sizeOf({ off }: DiscountWish): number {
  return off.kind === 'rate' ? off.rateBp : off.amountMinor;
}
