import { createHash, randomBytes } from 'node:crypto';
import { addDays, type ClinicDate, type Instant, instantAt } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { zoneOf } from '#server/features/business-days/index';
import { patientOf } from '#server/features/patients/index';
import type { Actor, StaffActor } from '#server/platform/actor';
import { insertRow, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { newestVersion, type QuoteRow, type VersionRow } from './quote-repository.ts';
import { quoteToWrite } from './save-draft.ts';

declare module '#server/platform/facts' {
  interface FactMap {
    /** A version went out, or went out again. The link's secret stands in linkUrl alone, and only for the mail. */
    'quote.issued': {
      readonly quoteId: number;
      readonly quoteVersionId: number;
      readonly siteId: number;
      /** null: no mail, the paper goes by hand. */
      readonly quoteLinkId: number | null;
      readonly linkUrl: string | null;
      readonly email: string | null;
      readonly actor: Actor;
    };
  }
}

/** A lapsed quote can still be read for a while; it says that it has lapsed. */
const MARGIN_DAYS = 30;

/** Once accepted the page holds schedule, receipts and cover: it lives as long as the longest usual cover. */
const COURSE_DAYS = 2 * 366;

/** The address in the mail; the token is worth the page and is stored nowhere. */
function linkUrl(deps: Pick<Deps, 'config'>, token: string): string {
  return `${deps.config.publicUrl}/q/${token}`;
}

interface Outgoing {
  readonly quote: QuoteRow;
  readonly version: Pick<VersionRow, 'quoteVersionId' | 'validUntil'>;
  readonly email: string;
  readonly actor: StaffActor;
}

/** Makes a link of 32 random bytes, stores its digest, and tells who mails it. */
export async function sendLink(trx: Trx, deps: Deps, outgoing: Outgoing): Promise<void> {
  const { quote, version, email, actor } = outgoing;
  const token = randomBytes(32).toString('base64url');
  const quoteLinkId = await insertRow(trx, 'quote_links', {
    quote_id: quote.quoteId,
    quote_version_id: version.quoteVersionId,
    token_hash: createHash('sha256').update(token).digest(),
    sent_to: email,
    expires_at: sqlInstant(await endOf(trx, quote.siteId, addDays(version.validUntil, MARGIN_DAYS))),
    created_at: sqlInstant(deps.clock.now()),
  });
  await deps.facts.publish(trx, 'quote.issued', {
    quoteId: quote.quoteId,
    quoteVersionId: version.quoteVersionId,
    siteId: quote.siteId,
    quoteLinkId,
    linkUrl: linkUrl(deps, token),
    email,
    actor,
  });
}

/** The first moment of the day after, on the site's wall. */
async function endOf(trx: Trx, siteId: number, day: ClinicDate): Promise<Instant> {
  return instantAt(addDays(day, 1), '00:00', await zoneOf(trx, siteId));
}

/**
 * Sends the newest version again; links sent before stop working.
 * @throws Problem refused 'not_issued', 'no_email'
 */
export async function sendQuoteAgain(deps: Deps, quoteId: number, actor: StaffActor): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const quote = await quoteToWrite(trx, quoteId, actor);
    const version = await newestVersion(trx, quoteId);
    if (!version || (quote.state !== 'issued' && quote.state !== 'accepted'))
      throw refused('not_issued', `A quote that is ${quote.state} is not sent. Send a new version instead.`);
    const email = (await patientOf(trx, quote.patientId))?.email ?? null;
    if (email === null)
      throw refused('no_email', 'The patient has no e-mail address. Record one on the patient’s page first.');
    await revokeAll(trx, deps, quoteId);
    await sendLink(trx, deps, { quote, version, email, actor });
    if (quote.state === 'accepted') await keepLinksForCourse(trx, deps, quoteId);
    await note(trx, deps, quote, 'quote.sent_again', actor);
  });
}

/** Stops every link of a quote. */
export async function revokeQuoteLinks(deps: Deps, quoteId: number, actor: StaffActor): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const quote = await quoteToWrite(trx, quoteId, actor);
    await revokeAll(trx, deps, quoteId);
    await note(trx, deps, quote, 'quote.links_revoked', actor);
  });
}

async function revokeAll(trx: Trx, deps: Deps, quoteId: number): Promise<void> {
  await trx('quote_links')
    .where({ quote_id: quoteId })
    .whereNull('revoked_at')
    .update({ revoked_at: sqlInstant(deps.clock.now()) });
}

/** The links of an accepted quote stay good for the course of care. */
export async function keepLinksForCourse(trx: Trx, deps: Deps, quoteId: number): Promise<void> {
  const until = new Date(Date.parse(deps.clock.now()) + COURSE_DAYS * 86_400_000).toISOString() as Instant;
  await trx('quote_links')
    .where({ quote_id: quoteId })
    .whereNull('revoked_at')
    .update({ expires_at: sqlInstant(until) });
}

async function note(trx: Trx, deps: Deps, quote: QuoteRow, action: string, actor: StaffActor): Promise<void> {
  await recordAudit(trx, deps, {
    actor,
    action,
    subjectType: 'quote',
    subjectId: quote.quoteId,
    siteId: quote.siteId,
  });
}
