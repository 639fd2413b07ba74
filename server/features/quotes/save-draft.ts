import { QUOTE, type QuoteDraft } from '#domain/quotes/index';
import type { Instant } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { conflict, notFound, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { lockQuote, type QuoteRow } from './quote-repository.ts';

/**
 * Saves a draft as typed, wrong or unfinished as it may be. An issued quote's draft can be written on, the issued version stays.
 * @throws Problem conflict 'draft_changed', refused 'quote_is_closed'
 */
export async function saveDraft(
  deps: Deps,
  quoteId: number,
  change: { readonly draft: QuoteDraft; readonly draftVersion: number },
  actor: StaffActor,
): Promise<{ draftVersion: number; savedAt: Instant }> {
  return await inTransaction(deps.db, async (trx) => {
    const quote = await quoteToWrite(trx, quoteId, actor);
    if (QUOTE.follows[quote.state].length === 0)
      throw refused(
        'quote_is_closed',
        `This quote is ${quote.state}; its draft is closed. Begin a new quote.`,
      );
    mustBeNewest(quote, change.draftVersion);
    const savedAt = deps.clock.now();
    const draftVersion = quote.draftVersion + 1;
    await trx('quotes')
      .where({ quote_id: quoteId })
      .update({
        draft: JSON.stringify(change.draft),
        draft_version: draftVersion,
        changed_at: sqlInstant(savedAt),
      });
    return { draftVersion, savedAt };
  });
}

/** A quote locked for a person of its site. Throws not_found for everybody else. */
export async function quoteToWrite(trx: Trx, quoteId: number, actor: StaffActor): Promise<QuoteRow> {
  const quote = await lockQuote(trx, quoteId);
  if (!quote) throw notFound('quote');
  mustWorkAt(actor, quote.siteId, 'quote');
  return quote;
}

/** Refuses to go on from a draft that somebody else has saved meanwhile. */
export function mustBeNewest(quote: QuoteRow, draftVersion: number): void {
  if (quote.draftVersion !== draftVersion) {
    throw conflict(
      'draft_changed',
      'This draft was saved elsewhere meanwhile. What you typed is still on your screen; look at the newer draft before you go on.',
    );
  }
}

/** When to talk to the patient next; null for not at all. */
export async function setNextContact(
  deps: Deps,
  quoteId: number,
  nextContactOn: QuoteRow['nextContactOn'],
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const quote = await quoteToWrite(trx, quoteId, actor);
    await trx('quotes').where({ quote_id: quoteId }).update({ next_contact_on: nextContactOn });
    await recordAudit(trx, deps, {
      actor,
      action: 'quote.next_contact',
      subjectType: 'quote',
      subjectId: quoteId,
      siteId: quote.siteId,
      before: { nextContactOn: quote.nextContactOn },
      after: { nextContactOn },
    });
  });
}
