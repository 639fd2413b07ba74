import type { CheckoutView } from '#contract/payments';
import type { PatientQuote } from '#contract/portal';
import { EYES } from '#domain/eye';
import type { CurrencyCode } from '#domain/money/index';
import type { CourseInput, PricedCourse } from '#domain/pricing/index';
import type { ClinicDate } from '#domain/time/index';
import { todayAt } from '#server/features/business-days/index';
import { courseMoney } from '#server/features/courses/index';
import { type CheckoutAttempt, latestAttempt, receiptsOfCourse } from '#server/features/payments/index';
import type { PatientActor } from '#server/platform/actor';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';

interface QuoteRow {
  quote_id: number;
  number: string;
  state: 'draft' | 'issued' | 'accepted' | 'lapsed' | 'withdrawn';
  clinic_name: string;
  site_name: string;
  site_address: string;
  given_name: string;
  family_name: string;
  quote_version_id: number;
  version_no: number;
  newest_version_no: number;
  content: string;
  issued_on: ClinicDate;
  valid_until: ClinicDate;
  option_no: number | null;
  typed_name: string | null;
  accepted_on: ClinicDate | null;
  course_id: number | null;
}

interface QuoteContent {
  readonly surgeonName: string | null;
  readonly options: readonly {
    readonly label: string;
    readonly input: CourseInput;
    readonly priced: PricedCourse;
  }[];
}

/** The quote a patient's link leads to, with nothing in it that is the clinic's own business. */
export async function readPatientQuote(
  deps: Pick<Deps, 'db' | 'clock'>,
  actor: PatientActor,
): Promise<PatientQuote> {
  const row = await quoteRow(deps, actor);
  const content = JSON.parse(row.content) as QuoteContent;
  const today = await todayAt(deps.db, deps, actor.siteId);
  const first = content.options[0];
  if (!first) throw notFound('quote');
  return {
    clinicName: row.clinic_name,
    siteName: row.site_name,
    siteAddress: row.site_address,
    quoteNumber: row.number,
    quoteVersionId: row.quote_version_id,
    versionNo: row.version_no,
    state: stateOf(row, today),
    patientName: `${row.given_name} ${row.family_name}`,
    givenName: row.given_name,
    surgeonName: content.surgeonName,
    currency: first.priced.currency,
    issuedOn: row.issued_on,
    validUntil: row.valid_until,
    options: content.options.map(({ label, input, priced }, index) =>
      patientOption(index + 1, label, input, priced),
    ),
    accepted:
      row.option_no !== null && row.accepted_on !== null
        ? { optionNo: row.option_no, typedName: row.typed_name ?? '', acceptedOn: row.accepted_on }
        : null,
    course: row.course_id === null ? null : await patientCourse(deps, row.course_id),
  };
}

async function quoteRow(deps: Pick<Deps, 'db'>, actor: PatientActor): Promise<QuoteRow> {
  const [row] = await rawRows<QuoteRow>(
    deps.db,
    `SELECT q.quote_id, q.number, q.state, k.name AS clinic_name, s.name AS site_name, s.address AS site_address,
            p.given_name, p.family_name, v.quote_version_id, v.version_no,
            (SELECT MAX(n.version_no) FROM quote_versions n WHERE n.quote_id = q.quote_id) AS newest_version_no,
            v.content, v.issued_on, v.valid_until, a.option_no, a.typed_name, a.accepted_on, c.course_id
     FROM quote_links l
     JOIN quotes q ON q.quote_id = l.quote_id
     JOIN quote_versions v ON v.quote_version_id = l.quote_version_id
     JOIN sites s ON s.site_id = q.site_id
     JOIN clinics k ON k.clinic_id = s.clinic_id
     JOIN patients p ON p.patient_id = q.patient_id
     LEFT JOIN quote_acceptances a ON a.quote_id = q.quote_id
     LEFT JOIN courses c ON c.quote_id = q.quote_id
     WHERE l.quote_link_id = ?`,
    [actor.quoteLinkId],
  );
  if (!row) throw notFound('quote');
  return row;
}

function stateOf(row: QuoteRow, today: ClinicDate): PatientQuote['state'] {
  if (row.state === 'accepted' || row.state === 'withdrawn') return row.state;
  if (row.version_no < row.newest_version_no) return 'superseded';
  return row.state === 'lapsed' || row.valid_until < today ? 'lapsed' : 'issued';
}

function patientOption(
  optionNo: number,
  label: string,
  input: CourseInput,
  priced: PricedCourse,
): PatientQuote['options'][number] {
  const treated = EYES.filter((eye) => input.eyes[eye] !== null);
  return {
    optionNo,
    label,
    standing: priced.standing,
    surgeryOn: treated.map((eye) => ({
      eye,
      on: input.surgery.plan === 'staged' ? input.surgery.on[eye] : input.surgery.on,
    })),
    totalMinor: priced.totalMinor,
    taxMinor: priced.taxMinor,
    taxWords: taxWords(priced),
    eyes: treated.map((eye) => ({
      eye,
      procedure: procedureOf(priced, eye),
      shareMinor: priced.shares[eye],
    })),
    lines: priced.lines.map(({ label: row, detail, laterality, amountMinor }) => ({
      label: row,
      detail,
      laterality,
      amountMinor,
    })),
    included: priced.included.map((each) => each.label),
    notIncluded: [...priced.notIncluded],
    schedule: priced.schedule.map(({ label: due, detail, dueOn, amountMinor, from }) => ({
      label: due,
      detail,
      dueOn,
      amountMinor,
      from,
    })),
    depositMinor: priced.depositMinor,
    cancellation: priced.cancellation.map(
      ({ event, until, label: row, detail, keptMinor, comesBackMinor }) => ({
        event,
        until,
        label: row,
        detail,
        keptMinor,
        comesBackMinor,
      }),
    ),
    cover: priced.cover.map((cover) => ({
      eye: cover.eye,
      label: cover.label,
      months: cover.months,
      from: cover.from,
      until: cover.until,
      conditions: [...cover.conditions],
      priceOutOfCoverMinor: cover.priceOutOfCoverMinor,
    })),
    warnings: priced.warnings.map((warning) => warning.words),
  };
}

/** The name of what is done to an eye, from its own lines of the price. */
function procedureOf(priced: PricedCourse, eye: 'OD' | 'OS'): string {
  const surgery = priced.obligations.find((each) => each.kind === 'surgery' && each.laterality === eye);
  const line = priced.lines.find((each) => each.kind === 'procedure' && each.laterality === eye);
  return line?.detail ?? surgery?.label ?? 'Treatment';
}

function taxWords(priced: PricedCourse): string {
  if (priced.taxMinor > 0) return 'tax included';
  return priced.taxes[0]?.exemptionReason ? 'tax exempt' : 'no tax';
}

async function patientCourse(
  deps: Pick<Deps, 'db' | 'clock'>,
  courseId: number,
): Promise<PatientQuote['course']> {
  const money = await courseMoney(deps.db, deps, courseId);
  const attempt = await latestAttempt(deps.db, courseId);
  const receipts = await receiptsOfCourse(deps.db, courseId);
  return {
    number: money.course.number,
    totalMinor: money.course.totalMinor,
    paidMinor: money.paidMinor,
    dueNowMinor: money.dueNowMinor,
    leftMinor: money.leftMinor,
    eyes: money.eyes.map((eye) => ({
      eye: eye.eye,
      procedure: eye.procedureLabel,
      state: eye.state,
      money: money.paidFor.eyes.find((share) => share.eye === eye.eye)?.money ?? 'none',
      plannedOn: eye.plannedOn,
      doneOn: eye.doneOn,
    })),
    dues: money.dues.map((due) => ({
      ...due,
      paidMinor:
        money.paidFor.dues.find((paid) => paid.dueNo === due.dueNo)?.paidMinor ??
        (0 as typeof due.amountMinor),
    })),
    receipts: receipts.map((receipt) => ({
      receiptId: receipt.receiptId,
      number: receipt.number,
      occurredOn: receipt.occurredOn,
      totalMinor: receipt.totalMinor,
      voided: receipt.voided !== null,
    })),
    checkout: attempt ? checkoutView(attempt) : null,
  };
}

/** A checkout as the payer may see it: the hosted page's address only while it is open. */
export function checkoutView(attempt: CheckoutAttempt): CheckoutView {
  return {
    attemptKey: attempt.attemptKey,
    state: attempt.state,
    purpose: attempt.purpose,
    currency: attempt.currency as CurrencyCode,
    amountMinor: attempt.amountMinor,
    url: attempt.state === 'open' ? attempt.sessionUrl : null,
    receiptId: attempt.receiptId,
  };
}
