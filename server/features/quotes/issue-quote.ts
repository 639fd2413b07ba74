import { createHash } from 'node:crypto';
import type { Minor } from '#domain/money/index';
import { canonicalJson } from '#domain/pricing/index';
import { QUOTE, type QuoteContent, type QuoteDraft, type QuoteOption } from '#domain/quotes/index';
import { takeStep } from '#domain/state-machine';
import type { ClinicDate } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { bookInForce } from '#server/features/catalogue/index';
import { type PatientRow, type PlanRow, patientOf } from '#server/features/patients/index';
import type { StaffActor } from '#server/platform/actor';
import { insertRow, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { type FieldError, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { discountsNotAgreed } from './discount-approval.ts';
import { type AgreedOption, mustBePriced, priceOptions, quoteFacts } from './price-options.ts';
import { sendLink } from './quote-links.ts';
import { newestVersion, type QuoteRow } from './quote-repository.ts';
import { mustBeNewest, quoteToWrite } from './save-draft.ts';

export interface IssueWanted {
  readonly draftVersion: number;
  /** What the person saw, option by option. */
  readonly options: readonly { readonly totalMinor: Minor; readonly contentHash: string }[];
  readonly withoutMail: boolean;
}

/**
 * Freezes the saved draft as the next version: the server prices every option anew, holds it against what the person saw, and
 * stores input, price, book version and hash (invariant 15). Then the patient's link goes out.
 *
 * @throws Problem conflict 'draft_changed' or 'figures_differ', refused 'cannot_be_priced' naming each field,
 *         'approval_needed', 'no_email'
 */
export async function issueQuote(
  deps: Deps,
  quoteId: number,
  wanted: IssueWanted,
  actor: StaffActor,
): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const quote = await quoteToWrite(trx, quoteId, actor);
    const step = takeStep(QUOTE, quote.state, 'issued');
    if (!step.ok || quote.draft === null) {
      throw refused('quote_is_closed', `This quote is ${quote.state} and cannot be sent. Begin a new quote.`);
    }
    mustBeNewest(quote, wanted.draftVersion);
    const patient = await patientOf(trx, quote.patientId);
    if (!patient) throw notFound('patient');
    const today = await todayAt(trx, deps, quote.siteId);
    const { priceBookId, book } = await bookInForce(trx, quote.siteId, today);
    const { facts, plan } = await quoteFacts(trx, quote.patientId, today);
    const options = mustBePriced(priceOptions(quote.draft, facts, book));
    mustBeAsSeen(options, wanted);
    await mustBeAgreed(trx, quoteId, options);
    const content = contentOf(quote.draft, patient, plan, options);
    const version = await insertVersion(trx, deps, { quote, content, priceBookId, today, actor });
    await markIssued(trx, deps, quote);
    await tellPatient(trx, deps, { quote, version, patient, withoutMail: wanted.withoutMail, actor });
    await recordAudit(trx, deps, {
      actor,
      action: 'quote.issued',
      subjectType: 'quote',
      subjectId: quoteId,
      siteId: quote.siteId,
      after: {
        versionNo: version.versionNo,
        totalsMinor: options.map((option) => option.priced.totalMinor),
        contentHashes: options.map((option) => option.contentHash),
      },
    });
  });
}

function mustBeAsSeen(options: readonly AgreedOption[], wanted: IssueWanted): void {
  const fields: FieldError[] = [];
  options.forEach((option, index) => {
    const seen = wanted.options[index];
    if (seen?.totalMinor !== option.priced.totalMinor)
      fields.push({
        field: `options.${index}.totalMinor`,
        message: `The server works out ${option.priced.totalMinor}.`,
      });
    else if (seen.contentHash !== option.contentHash)
      fields.push({
        field: `options.${index}.contentHash`,
        message: 'The price book, the plan or the day has changed.',
      });
  });
  if (wanted.options.length !== options.length)
    fields.push({ field: 'options', message: `The draft has ${options.length}.` });
  if (fields.length > 0) {
    throw new Problem('conflict', {
      reason: 'figures_differ',
      detail:
        'What the page showed is not what the server works out now. Look at the new figures, then send. Nothing was sent.',
      fields,
    });
  }
}

async function mustBeAgreed(trx: Trx, quoteId: number, options: readonly AgreedOption[]): Promise<void> {
  for (const [index, option] of options.entries()) {
    const [over] = await discountsNotAgreed(trx, quoteId, option);
    if (!over) continue;
    const at = option.input.discounts.findIndex((discount) => discount.discountId === over.discountId);
    throw new Problem('refused', {
      reason: 'approval_needed',
      detail: `${over.reason} of ${over.asked} is over your limit of ${over.ownLimit}. Give less, or ask a manager to approve it.`,
      fields: [
        {
          field: `options.${index}.discounts.${at}.off`,
          message: `At most ${over.ownLimit} without approval.`,
        },
      ],
    });
  }
}

function contentOf(
  draft: QuoteDraft,
  patient: PatientRow,
  plan: PlanRow | undefined,
  options: readonly AgreedOption[],
): QuoteContent {
  return {
    patient: { givenName: patient.givenName, familyName: patient.familyName, bornOn: patient.bornOn },
    surgeonUserId: plan?.surgeonUserId ?? null,
    surgeonName: plan?.surgeonName ?? null,
    approvedPlanId: plan?.approvedPlanId ?? null,
    options: options.map(
      ({ label, input, priced, contentHash }): QuoteOption => ({ label, input, priced, contentHash }),
    ),
    draft,
  };
}

interface IssuedVersion {
  readonly quoteVersionId: number;
  readonly versionNo: number;
  readonly validUntil: ClinicDate;
}

async function insertVersion(
  trx: Trx,
  deps: Deps,
  given: {
    readonly quote: QuoteRow;
    readonly content: QuoteContent;
    readonly priceBookId: number;
    readonly today: ClinicDate;
    readonly actor: StaffActor;
  },
): Promise<IssuedVersion> {
  const { quote, content, today, actor } = given;
  const versionNo = ((await newestVersion(trx, quote.quoteId))?.versionNo ?? 0) + 1;
  const validUntil = content.options[0]?.priced.validUntil ?? today;
  const quoteVersionId = await insertRow(trx, 'quote_versions', {
    quote_id: quote.quoteId,
    version_no: versionNo,
    price_book_id: given.priceBookId,
    approved_plan_id: content.approvedPlanId,
    content: JSON.stringify(content),
    content_hash: createHash('sha256').update(canonicalJson(content)).digest('hex'),
    issued_by: actor.userId,
    issued_at: sqlInstant(deps.clock.now()),
    issued_on: today,
    valid_until: validUntil,
  });
  return { quoteVersionId, versionNo, validUntil };
}

/** The draft's version moves too, so that a second click on "send" finds another draft than it saw. */
async function markIssued(trx: Trx, deps: Deps, quote: QuoteRow): Promise<void> {
  await trx('quotes')
    .where({ quote_id: quote.quoteId })
    .update({
      state: 'issued',
      draft_version: quote.draftVersion + 1,
      changed_at: sqlInstant(deps.clock.now()),
    });
  await hint(trx, deps.clock, { siteId: quote.siteId, topic: 'quote', subjectId: quote.quoteId });
}

async function tellPatient(
  trx: Trx,
  deps: Deps,
  given: {
    readonly quote: QuoteRow;
    readonly version: IssuedVersion;
    readonly patient: PatientRow;
    readonly withoutMail: boolean;
    readonly actor: StaffActor;
  },
): Promise<void> {
  const { quote, version, patient, actor } = given;
  if (!given.withoutMail) {
    if (patient.email === null)
      throw refused(
        'no_email',
        'The patient has no e-mail address. Record one on the patient’s page, or issue the quote without mail.',
        'withoutMail',
      );
    await sendLink(trx, deps, { quote, version, email: patient.email, actor });
    return;
  }
  await deps.facts.publish(trx, 'quote.issued', {
    quoteId: quote.quoteId,
    quoteVersionId: version.quoteVersionId,
    siteId: quote.siteId,
    quoteLinkId: null,
    linkUrl: null,
    email: null,
    actor,
  });
}
