import { EYES } from '#domain/eye';
import { ACCOUNT } from '#domain/ledger/index';
import { splitByWeights } from '#domain/money/index';
import {
  type CourseInput,
  type Obligation,
  type PriceBook,
  type PricedCourse,
  quoteCourse,
} from '#domain/pricing/index';
import { type ClinicDate, yearOf } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { takeNumber } from '#server/features/ledger/index';
import type { Actor } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { BrokenInvariant } from '#server/platform/problem';

declare module '#server/platform/facts' {
  interface FactMap {
    'course.opened': { readonly courseId: number; readonly siteId: number; readonly quoteId: number };
  }
}

/** An accepted option, as the quotes feature tells it. */
export interface AcceptedOption {
  readonly quoteId: number;
  readonly quoteVersionId: number;
  readonly optionNo: number;
  readonly acceptedOn: ClinicDate;
  readonly actor: Actor;
}

interface AcceptedQuote {
  site_id: number;
  site_code: string;
  patient_id: number;
  content: string;
  price_book_content: string;
}

/** Income account of each kind of promise; the chart's defaults. */
const INCOME_ACCOUNT: Readonly<Record<Obligation['kind'], string>> = {
  assessment: ACCOUNT.assessmentIncome,
  surgery: ACCOUNT.surgeryIncome,
  aftercare: ACCOUNT.aftercareIncome,
  service: ACCOUNT.aftercareIncome,
  enhancement: ACCOUNT.enhancementIncome,
  goods: ACCOUNT.goodsIncome,
  instalment_charge: ACCOUNT.instalmentCharges,
};

/**
 * Opens the course of care for an accepted option, in the transaction of the acceptance. Priced again by the same engine and
 * the book of the quote, with the day of acceptance known, so that dates count from it; the total may not move.
 */
export async function openCourse(
  trx: Trx,
  deps: Pick<Deps, 'clock' | 'facts'>,
  accepted: AcceptedOption,
): Promise<number> {
  const quote = await acceptedQuote(trx, accepted);
  const content = JSON.parse(quote.content) as {
    surgeonUserId: number;
    options: { input: CourseInput; priced: PricedCourse }[];
  };
  const option = content.options[accepted.optionNo - 1];
  if (!option)
    throw new BrokenInvariant(
      `Accepted option ${accepted.optionNo} is not on quote version ${accepted.quoteVersionId}`,
    );
  const book = JSON.parse(quote.price_book_content) as PriceBook;
  const priced = pricedAsAccepted(option, book, accepted.acceptedOn);
  const seriesNo = await takeNumber(trx, quote.site_id, yearOf(accepted.acceptedOn), 'course');
  const year = String(yearOf(accepted.acceptedOn)).slice(2);
  const courseId = await insertRow(trx, 'courses', {
    number: `${quote.site_code}-C-${year}-${String(seriesNo).padStart(4, '0')}`,
    site_id: quote.site_id,
    patient_id: quote.patient_id,
    quote_id: accepted.quoteId,
    quote_version_id: accepted.quoteVersionId,
    option_no: accepted.optionNo,
    surgeon_user_id: content.surgeonUserId,
    currency: priced.currency,
    total_minor: priced.totalMinor,
    tax_minor: priced.taxMinor,
    priced: JSON.stringify(priced),
    accepted_on: accepted.acceptedOn,
    created_at: sqlInstant(deps.clock.now()),
  });
  await insertEyes(trx, courseId, option.input, priced, book);
  await insertDues(trx, courseId, priced);
  await insertObligations(trx, courseId, priced);
  await recordAudit(trx, deps, {
    actor: accepted.actor,
    action: 'course.opened',
    subjectType: 'course',
    subjectId: courseId,
    siteId: quote.site_id,
    after: { quoteId: accepted.quoteId, optionNo: accepted.optionNo, totalMinor: priced.totalMinor },
  });
  await deps.facts.publish(trx, 'course.opened', {
    courseId,
    siteId: quote.site_id,
    quoteId: accepted.quoteId,
  });
  return courseId;
}

async function acceptedQuote(trx: Trx, accepted: AcceptedOption): Promise<AcceptedQuote> {
  const [row] = await rawRows<AcceptedQuote>(
    trx,
    `SELECT q.site_id, s.code AS site_code, q.patient_id, v.content, b.content AS price_book_content
     FROM quote_versions v
     JOIN quotes q ON q.quote_id = v.quote_id
     JOIN sites s ON s.site_id = q.site_id
     JOIN price_books b ON b.price_book_id = v.price_book_id
     WHERE v.quote_version_id = ? AND q.quote_id = ?`,
    [accepted.quoteVersionId, accepted.quoteId],
  );
  if (!row) throw new BrokenInvariant(`Accepted quote version ${accepted.quoteVersionId} is not there`);
  return row;
}

function pricedAsAccepted(
  option: { input: CourseInput; priced: PricedCourse },
  book: PriceBook,
  acceptedOn: ClinicDate,
): PricedCourse {
  const result = quoteCourse({ ...option.input, acceptedOn }, book);
  if (!result.ok)
    throw new BrokenInvariant(`An accepted option no longer prices: ${result.refusals[0]?.code}`);
  if (result.course.totalMinor !== option.priced.totalMinor)
    throw new BrokenInvariant('The accepted total moved on acceptance');
  return result.course;
}

async function insertEyes(
  trx: Trx,
  courseId: number,
  input: CourseInput,
  priced: PricedCourse,
  book: PriceBook,
): Promise<void> {
  for (const eye of EYES) {
    const wish = input.eyes[eye];
    if (!wish) continue;
    await trx('course_eyes').insert({
      course_id: courseId,
      eye,
      procedure_code: wish.procedureId,
      procedure_label:
        book.procedures.find((procedure) => procedure.id === wish.procedureId)?.label ?? wish.procedureId,
      price_minor: priced.shares[eye],
      state: 'planned',
      planned_on: input.surgery.plan === 'staged' ? input.surgery.on[eye] : input.surgery.on,
    });
  }
}

async function insertDues(trx: Trx, courseId: number, priced: PricedCourse): Promise<void> {
  const dues = priced.schedule.filter((due) => due.amountMinor > 0);
  if (dues.length === 0) return;
  await trx('course_dues').insert(
    dues.map((due, index) => ({
      course_id: courseId,
      due_no: index + 1,
      kind: due.kind,
      label: due.label,
      due_on: due.dueOn,
      amount_minor: due.amountMinor,
    })),
  );
}

async function insertObligations(trx: Trx, courseId: number, priced: PricedCourse): Promise<void> {
  const parts = priced.obligations.flatMap((obligation) =>
    obligation.parts.map((part) => ({ obligation, part })),
  );
  const taxes = splitByWeights(
    priced.taxMinor,
    parts.map(({ part }) => part.amountMinor),
  );
  await trx('obligations').insert(
    parts.map(({ obligation, part }, index) => ({
      course_id: courseId,
      obligation_no: index + 1,
      kind: obligation.kind,
      group_key: obligation.id,
      part_key: part.id,
      eye: part.laterality === 'OU' ? null : part.laterality,
      label: part.label,
      stand_alone_minor: obligation.standAloneMinor,
      allocated_minor: part.amountMinor,
      tax_minor: taxes[index],
      account_code: INCOME_ACCOUNT[obligation.kind],
    })),
  );
}
