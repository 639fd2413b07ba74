import { QUOTE, refuseAcceptance, stateOn } from '#domain/quotes/index';
import { takeStep } from '#domain/state-machine';
import { type ClinicDate, formatDay } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { priceBookOf } from '#server/features/catalogue/index';
import { type Actor, mustWorkAt, userIdOf } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { BrokenInvariant, conflict, notFound, refused } from '#server/platform/problem';
import { keepLinksForCourse } from './quote-links.ts';
import { lockQuote, type QuoteRow, type VersionRow, versionsOf } from './quote-repository.ts';

declare module '#server/platform/facts' {
  interface FactMap {
    'quote.accepted': {
      readonly quoteId: number;
      readonly quoteVersionId: number;
      readonly optionNo: number;
      readonly acceptedOn: ClinicDate;
      readonly actor: Actor;
    };
  }
}

export interface Acceptance {
  readonly quoteId: number;
  /** The version the person had before them: an older one is not accepted by mistake. */
  readonly quoteVersionId: number;
  /** From 1. */
  readonly optionNo: number;
  readonly typedName: string;
  /** The statements ticked, or where the signed form is kept. */
  readonly ticks: readonly string[];
  readonly channel: 'link' | 'desk';
  readonly actor: Actor;
}

/**
 * One option becomes the patient's: the price, the terms and the day are fixed, a course of care opens in the same transaction.
 * Accepting the same option again changes nothing.
 *
 * @throws Problem not_found, conflict 'quote_accepted' or 'quote_superseded', refused with the rule's name
 */
export async function acceptQuote(trx: Trx, deps: Deps, acceptance: Acceptance): Promise<void> {
  const { quoteId, quoteVersionId, optionNo, actor } = acceptance;
  const quote = await lockQuote(trx, quoteId);
  if (!quote) throw notFound('quote');
  if (actor.kind === 'staff') mustWorkAt(actor, quote.siteId, 'quote');
  if (actor.kind === 'patient' && actor.quoteId !== quoteId) throw notFound('quote');
  if (await wasAccepted(trx, acceptance)) return;
  const version = await versionToAccept(trx, quote, quoteVersionId);
  const acceptedOn = await todayAt(trx, deps, quote.siteId);
  await mustBeOpen(trx, quote, version, optionNo, acceptedOn);
  const now = sqlInstant(deps.clock.now());
  await insertRow(trx, 'quote_acceptances', {
    quote_id: quoteId,
    quote_version_id: quoteVersionId,
    option_no: optionNo,
    channel: acceptance.channel,
    typed_name: acceptance.typedName,
    ticks: JSON.stringify(acceptance.ticks),
    came_from: actor.from,
    accepted_by_user_id: userIdOf(actor),
    accepted_at: now,
    accepted_on: acceptedOn,
  });
  await trx('quotes')
    .where({ quote_id: quoteId })
    .update({ state: 'accepted', next_contact_on: null, changed_at: now });
  await keepLinksForCourse(trx, deps, quoteId);
  await recordAudit(trx, deps, {
    actor,
    action: 'quote.accepted',
    subjectType: 'quote',
    subjectId: quoteId,
    siteId: quote.siteId,
    after: {
      quoteVersionId,
      optionNo,
      channel: acceptance.channel,
      typedName: acceptance.typedName,
      ticks: acceptance.ticks,
    },
  });
  await deps.facts.publish(trx, 'quote.accepted', { quoteId, quoteVersionId, optionNo, acceptedOn, actor });
  await hint(trx, deps.clock, {
    siteId: quote.siteId,
    topic: 'quote',
    subjectId: quoteId,
    message: `Quote ${quote.number} was accepted.`,
  });
}

/** True for the same option of the same version; another one is a conflict. */
async function wasAccepted(trx: Trx, acceptance: Acceptance): Promise<boolean> {
  const [row] = await rawRows<{ quote_version_id: number; option_no: number }>(
    trx,
    'SELECT quote_version_id, option_no FROM quote_acceptances WHERE quote_id = ?',
    [acceptance.quoteId],
  );
  if (!row) return false;
  if (row.quote_version_id === acceptance.quoteVersionId && row.option_no === acceptance.optionNo)
    return true;
  throw conflict('quote_accepted', 'Another option of this quote was accepted already. Nothing was changed.');
}

async function versionToAccept(trx: Trx, quote: QuoteRow, quoteVersionId: number): Promise<VersionRow> {
  const versions = await versionsOf(trx, quote.quoteId);
  const wanted = versions.find((version) => version.quoteVersionId === quoteVersionId);
  if (!wanted) throw notFound('quote');
  if (wanted !== versions[0])
    throw conflict('quote_superseded', 'There is a newer version of this quote. Please look at that one.');
  return wanted;
}

async function mustBeOpen(
  trx: Trx,
  quote: QuoteRow,
  version: VersionRow,
  optionNo: number,
  acceptedOn: ClinicDate,
): Promise<void> {
  const state = stateOn(quote.state, version.validUntil, acceptedOn);
  if (state === 'lapsed')
    throw refused(
      'quote_lapsed',
      `This quote was good until ${formatDay(version.validUntil)}. The clinic sends a new one on request.`,
    );
  if (!takeStep(QUOTE, state, 'accepted').ok)
    throw refused('quote_is_closed', `A quote that is ${state} cannot be accepted.`);
  const option = version.content.options[optionNo - 1];
  if (!option) throw refused('no_such_option', 'Choose one of the options of this quote.', 'optionNo');
  const book = await priceBookOf(trx, version.priceBookId);
  if (!book) throw new BrokenInvariant(`The price book of quote version ${version.quoteVersionId} is gone`);
  const refusal = refuseAcceptance(option, book.book, acceptedOn);
  if (refusal) throw refused(refusal.reason, refusal.words);
}
