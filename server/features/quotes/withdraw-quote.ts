import { QUOTE } from '#domain/quotes/index';
import { takeStep } from '#domain/state-machine';
import { recordAudit } from '#server/features/audit/index';
import type { StaffActor } from '#server/platform/actor';
import { sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { quoteToWrite } from './save-draft.ts';

/** Withdraws a quote for a reason. The patient's link then says so; an accepted quote is a course and ends otherwise. */
export async function withdrawQuote(
  deps: Deps,
  quoteId: number,
  reason: string,
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const quote = await quoteToWrite(trx, quoteId, actor);
    const step = takeStep(QUOTE, quote.state, 'withdrawn');
    if (!step.ok)
      throw refused(
        'quote_is_closed',
        quote.state === 'accepted'
          ? 'The patient has accepted this quote. Cancel the course of care instead.'
          : 'This quote was withdrawn already.',
      );
    await trx('quotes')
      .where({ quote_id: quoteId })
      .update({
        state: 'withdrawn',
        withdrawn_reason: reason,
        next_contact_on: null,
        changed_at: sqlInstant(deps.clock.now()),
      });
    await recordAudit(trx, deps, {
      actor,
      action: 'quote.withdrawn',
      subjectType: 'quote',
      subjectId: quoteId,
      siteId: quote.siteId,
      before: { state: quote.state },
      after: { reason },
    });
    await hint(trx, deps.clock, { siteId: quote.siteId, topic: 'quote', subjectId: quoteId });
  });
}
