import type { PricedWire } from '#contract/priced';
import type { OptionPrice, QuoteLinkView, QuoteVersionView, QuoteView } from '#contract/quotes';
import { canonicalJson } from '#domain/pricing/index';
import { QUOTE, stateOn } from '#domain/quotes/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { todayAt } from '#server/features/business-days/index';
import { bookInForce } from '#server/features/catalogue/index';
import { newestPlan, type PlanRow, patientOf } from '#server/features/patients/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { type Db, rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { type PricedOption, priceOptions, quoteFacts } from './price-options.ts';
import { type QuoteRow, quoteOf, type VersionRow, versionsOf } from './quote-repository.ts';

type ReadDeps = Pick<Deps, 'db' | 'clock'>;
type Wire<T> = T extends readonly (infer Item)[] ? Wire<Item>[] : T;

/** The quote's sheet, bounded by the actor's sites. */
export async function readQuote(deps: ReadDeps, quoteId: number, actor: StaffActor): Promise<QuoteView> {
  const { db } = deps;
  const quote = await quoteOf(db, quoteId);
  if (!quote) throw notFound('quote');
  mustWorkAt(actor, quote.siteId, 'quote');
  const patient = await patientOf(db, quote.patientId);
  if (!patient) throw notFound('quote');
  const today = await todayAt(db, deps, quote.siteId);
  const versions = await versionsOf(db, quoteId);
  const newest = versions[0];
  const open = QUOTE.follows[quote.state].length > 0;
  const plan = await newestPlan(db, quote.patientId);
  const { acceptance, courseId, counsellor } = await endOf(db, quote);
  return {
    quoteId,
    number: quote.number,
    siteId: quote.siteId,
    state: stateOn(quote.state, newest?.validUntil ?? null, today),
    today,
    counsellor,
    createdAt: quote.createdAt,
    changedAt: quote.changedAt,
    nextContactOn: quote.nextContactOn,
    withdrawnReason: quote.withdrawnReason,
    patient: {
      patientId: patient.patientId,
      givenName: patient.givenName,
      familyName: patient.familyName,
      bornOn: patient.bornOn,
      email: patient.email,
    },
    plan: plan ? planView(plan, today) : null,
    draft: open ? (quote.draft as QuoteView['draft']) : null,
    draftVersion: quote.draftVersion,
    prices: open ? await draftPrices(deps, quote, today) : [],
    draftDiffers: newest === undefined || canonicalJson(newest.content.draft) !== canonicalJson(quote.draft),
    versions: versions.map(versionView),
    links: await linksOf(db, quoteId, deps.clock.now()),
    acceptance,
    courseId,
    approval: await lastApproval(db, quoteId),
  };
}

function planView(plan: PlanRow, today: ClinicDate): NonNullable<QuoteView['plan']> {
  return {
    ...plan,
    procedureIds: { OD: [...plan.procedureIds.OD], OS: [...plan.procedureIds.OS] },
    good: plan.expiresOn >= today,
  };
}

/** The saved draft as the server prices it today. */
export async function draftPrices(
  deps: Pick<Deps, 'db'>,
  quote: QuoteRow,
  today: ClinicDate,
): Promise<OptionPrice[]> {
  if (quote.draft === null) return [];
  const { book } = await bookInForce(deps.db, quote.siteId, today);
  const { facts } = await quoteFacts(deps.db, quote.patientId, today);
  return priceOptions(quote.draft, facts, book).map(optionPrice);
}

function optionPrice(option: PricedOption): OptionPrice {
  return option.ok
    ? {
        ok: true,
        totalMinor: option.priced.totalMinor,
        contentHash: option.contentHash,
        standing: option.priced.standing,
        bookVersion: option.priced.book.version,
      }
    : { ok: false, refusals: [...option.refusals] };
}

function versionView(version: VersionRow): QuoteVersionView {
  return {
    quoteVersionId: version.quoteVersionId,
    versionNo: version.versionNo,
    priceBookVersion: version.priceBookVersion,
    issuedOn: version.issuedOn,
    issuedAt: version.issuedAt,
    issuedBy: version.issuedBy,
    validUntil: version.validUntil,
    contentHash: version.contentHash,
    surgeonName: version.content.surgeonName,
    options: version.content.options as Wire<QuoteVersionView['options']>,
  };
}

async function linksOf(db: Db, quoteId: number, now: Instant): Promise<QuoteLinkView[]> {
  const rows = await rawRows<{
    quote_link_id: number;
    version_no: number;
    sent_to: string | null;
    created_at: Instant;
    expires_at: Instant;
    revoked_at: Instant | null;
    first_opened_at: Instant | null;
    last_opened_at: Instant | null;
  }>(
    db,
    `SELECT l.quote_link_id, v.version_no, l.sent_to, l.created_at, l.expires_at, l.revoked_at, l.first_opened_at, l.last_opened_at
     FROM quote_links l JOIN quote_versions v ON v.quote_version_id = l.quote_version_id
     WHERE l.quote_id = ? ORDER BY l.quote_link_id DESC`,
    [quoteId],
  );
  return rows.map((row) => ({
    quoteLinkId: row.quote_link_id,
    versionNo: row.version_no,
    sentTo: row.sent_to,
    createdAt: row.created_at,
    expiresAt: row.expires_at,
    revokedAt: row.revoked_at,
    firstOpenedAt: row.first_opened_at,
    lastOpenedAt: row.last_opened_at,
    works: row.revoked_at === null && row.expires_at > now,
  }));
}

/** How it ended, and who looks after it. */
async function endOf(
  db: Db,
  quote: QuoteRow,
): Promise<Pick<QuoteView, 'acceptance' | 'courseId' | 'counsellor'>> {
  const [row] = await rawRows<{
    counsellor: string;
    version_no: number | null;
    option_no: number;
    channel: 'link' | 'desk';
    typed_name: string;
    ticks: string;
    accepted_on: ClinicDate;
    accepted_at: Instant;
    recorded_by: string | null;
    course_id: number | null;
  }>(
    db,
    `SELECT k.name AS counsellor, v.version_no, a.option_no, a.channel, a.typed_name, a.ticks, a.accepted_on, a.accepted_at,
            r.name AS recorded_by, c.course_id
     FROM quotes q
     JOIN users k ON k.user_id = q.counsellor_user_id
     LEFT JOIN quote_acceptances a ON a.quote_id = q.quote_id
     LEFT JOIN quote_versions v ON v.quote_version_id = a.quote_version_id
     LEFT JOIN users r ON r.user_id = a.accepted_by_user_id
     LEFT JOIN courses c ON c.quote_id = q.quote_id
     WHERE q.quote_id = ?`,
    [quote.quoteId],
  );
  if (!row) throw notFound('quote');
  const acceptance =
    row.version_no === null
      ? null
      : {
          versionNo: row.version_no,
          optionNo: row.option_no,
          channel: row.channel,
          typedName: row.typed_name,
          ticks: JSON.parse(row.ticks) as string[],
          acceptedOn: row.accepted_on,
          acceptedAt: row.accepted_at,
          recordedBy: row.recorded_by,
        };
  return { acceptance, courseId: row.course_id, counsellor: row.counsellor };
}

async function lastApproval(db: Db, quoteId: number): Promise<QuoteView['approval']> {
  const [row] = await rawRows<{
    state: 'asked' | 'approved' | 'refused' | 'withdrawn';
    requested_by: string;
    decided_by: string | null;
    decision_note: string | null;
  }>(
    db,
    `SELECT a.state, q.name AS requested_by, d.name AS decided_by, a.decision_note
     FROM approvals a JOIN users q ON q.user_id = a.requested_by LEFT JOIN users d ON d.user_id = a.decided_by
     WHERE a.subject_type = 'quote' AND a.subject_id = ? ORDER BY a.approval_id DESC LIMIT 1`,
    [quoteId],
  );
  return row
    ? {
        state: row.state,
        requestedBy: row.requested_by,
        decidedBy: row.decided_by,
        decisionNote: row.decision_note,
      }
    : null;
}

/** A priced option as the API sends it. */
export function pricedWire(
  option: PricedOption,
):
  | { ok: true; contentHash: string; priced: PricedWire }
  | { ok: false; refusals: { field: string; code: string; words: string; change: string }[] } {
  return option.ok
    ? { ok: true, contentHash: option.contentHash, priced: option.priced }
    : { ok: false, refusals: [...option.refusals] };
}
