import { randomUUID } from 'node:crypto';
import { type Minor, minor, splitEvenly, subtract } from '#domain/money/index';
import type { OptionDraft, QuoteDraft } from '#domain/quotes/index';
import { type ClinicDate, clinicDate } from '#domain/time/index';
import type { AppDeps } from '#server/app';
import { bookInForce } from '#server/features/catalogue/index';
import { courseMoney } from '#server/features/courses/index';
import { recordEyeDone, recordFollowUpVisit } from '#server/features/delivery/index';
import { approvePlan, createPatient, recordPrescription } from '#server/features/patients/index';
import {
  reconcileCheckout,
  startCheckout,
  takeDeskPayment,
  voidDeskReceipt,
} from '#server/features/payments/index';
import {
  acceptQuote,
  createQuote,
  issueQuote,
  priceOptions,
  quoteFacts,
  quoteOf,
  saveDraft,
  versionsOf,
} from '#server/features/quotes/index';
import type { PatientActor } from '#server/platform/actor';
import { rawRows } from '#server/platform/db';
import { inTransaction } from '#server/platform/transaction';
import type { DemoClinic } from './clinic.ts';
import type { DemoPatient, DeskTenders } from './patients.ts';

/** Pays a hosted checkout as its payer would, at the local stand-in. */
export type PayAsPayer = (sessionId: string) => Promise<void>;

/** A patient on their way, with the keys the later days need. */
export interface Walker {
  readonly patient: DemoPatient;
  readonly patientId: number;
  readonly quoteId: number;
  courseId: number | null;
}

/** Takes up a patient, has the plan approved and sends the first quote. */
export async function takeUpAndQuote(
  deps: AppDeps,
  clinic: DemoClinic,
  patient: DemoPatient,
  days: { surgery: ClinicDate; second: ClinicDate | null; today: ClinicDate },
): Promise<Walker> {
  const { counsellor } = clinic.people;
  const [givenName, familyName] = patient.name;
  const email = `${givenName}.${familyName}@saltmarch.example`
    .toLowerCase()
    .normalize('NFD')
    .replace(/[^a-z0-9.@]/g, '');
  const patientId = await createPatient(
    deps,
    {
      siteId: clinic.sites[patient.site].siteId,
      givenName,
      familyName,
      bornOn: clinicDate(patient.bornOn),
      email,
      phone: null,
      patientClass: patient.priceList ?? 'standard',
      evenSo: false,
    },
    counsellor,
  );
  const fields = (typed: DemoPatient['od']) =>
    typed === null ? null : { sphere: typed[0], cylinder: typed[1], axis: typed[2], vertex: '' };
  await recordPrescription(
    deps,
    patientId,
    { refractedOn: days.today, OD: fields(patient.od), OS: fields(patient.os) },
    counsellor,
  );
  const osProcedure = patient.osProcedure ?? patient.procedure;
  await approvePlan(
    deps,
    patientId,
    { OD: patient.od ? [patient.procedure] : [], OS: patient.os ? [osProcedure] : [], expiresOn: undefined },
    clinic.people[patient.surgeon],
  );
  const quoteId = await createQuote(deps, patientId, counsellor);
  await writeAndIssue(deps, clinic, quoteId, patient, days);
  return { patient, patientId, quoteId, courseId: null };
}

function optionOf(
  patient: DemoPatient,
  days: { surgery: ClinicDate; second: ClinicDate | null },
): Omit<OptionDraft, 'label'> {
  const cover = patient.cover && !patient.package ? 'cover-24' : null;
  return {
    procedures: {
      OD: patient.od ? patient.procedure : null,
      OS: patient.os ? (patient.osProcedure ?? patient.procedure) : null,
    },
    covers: { OD: patient.od ? cover : null, OS: patient.os ? cover : null },
    surgery: days.second
      ? { plan: 'staged', on: { OD: days.surgery, OS: days.second } }
      : { plan: 'same_session', on: days.surgery },
    priceListId: patient.priceList ?? null,
    packageId: patient.package ? 'both-eyes-all-in' : null,
    addOns: [],
    discounts: [],
    paymentPlanId: null,
  };
}

async function writeAndIssue(
  deps: AppDeps,
  clinic: DemoClinic,
  quoteId: number,
  patient: DemoPatient,
  days: { surgery: ClinicDate; second: ClinicDate | null; today: ClinicDate },
): Promise<void> {
  const { counsellor } = clinic.people;
  const quote = await quoteOf(deps.db, quoteId);
  if (!quote?.draft) throw new Error(`Quote ${quoteId} has no draft`);
  const draft: QuoteDraft = { ...quote.draft, options: [{ label: '', ...optionOf(patient, days) }] };
  const { draftVersion } = await saveDraft(
    deps,
    quoteId,
    { draft, draftVersion: quote.draftVersion },
    counsellor,
  );
  const { facts } = await quoteFacts(deps.db, quote.patientId, days.today);
  const { book } = await inTransaction(deps.db, (trx) => bookInForce(trx, quote.siteId, days.today));
  const options = priceOptions(draft, facts, book).map((option) => {
    if (!option.ok) throw new Error(`${patient.name.join(' ')}: ${JSON.stringify(option.refusals)}`);
    return { totalMinor: option.priced.totalMinor, contentHash: option.contentHash };
  });
  await issueQuote(deps, quoteId, { draftVersion, options, withoutMail: false }, counsellor);
}

/** The patient accepts by their link and pays the deposit online. */
export async function acceptAndPayDeposit(deps: AppDeps, walker: Walker, pay: PayAsPayer): Promise<void> {
  const [version] = await versionsOf(deps.db, walker.quoteId);
  if (!version) throw new Error(`Quote ${walker.quoteId} was not issued`);
  const [link] = await rawRows<{ quote_link_id: number; site_id: number }>(
    deps.db,
    'SELECT l.quote_link_id, q.site_id FROM quote_links l JOIN quotes q ON q.quote_id = l.quote_id WHERE l.quote_id = ? ORDER BY l.quote_link_id DESC LIMIT 1',
    [walker.quoteId],
  );
  const actor: PatientActor = {
    kind: 'patient',
    quoteLinkId: link?.quote_link_id ?? 0,
    quoteId: walker.quoteId,
    siteId: link?.site_id ?? 0,
    from: 'demonstration',
  };
  await inTransaction(deps.db, (trx) =>
    acceptQuote(trx, deps, {
      quoteId: walker.quoteId,
      quoteVersionId: version.quoteVersionId,
      optionNo: 1,
      typedName: walker.patient.name.join(' '),
      ticks: ['I have read what is and is not included', 'I have read what comes back if plans change'],
      channel: 'link',
      actor,
    }),
  );
  const [course] = await rawRows<{ course_id: number }>(
    deps.db,
    'SELECT course_id FROM courses WHERE quote_id = ?',
    [walker.quoteId],
  );
  walker.courseId = course?.course_id ?? null;
  const attempt = await startCheckout(deps, {
    courseId: courseIdOf(walker),
    purpose: 'deposit',
    attemptKey: randomUUID(),
    returnUrl: `${deps.config.publicUrl}/my-quote`,
    email: null,
    actor,
  });
  if (attempt.sessionId === null) throw new Error('The hosted page was not opened');
  await pay(attempt.sessionId);
  await reconcileCheckout(deps, attempt.sessionId);
}

/** The balance at the desk, split over the patient's tenders. */
export async function payBalance(deps: AppDeps, clinic: DemoClinic, walker: Walker): Promise<void> {
  const { leftMinor } = await courseMoney(deps.db, deps, courseIdOf(walker));
  if (leftMinor <= 0) return;
  const take = async (names: DeskTenders) =>
    await takeDeskPayment(deps, {
      courseId: courseIdOf(walker),
      attemptKey: randomUUID(),
      payerName: walker.patient.name.join(' '),
      tenders: tendersFor(leftMinor, names, walker.quoteId),
      actor: clinic.people.desk,
    });
  if (walker.patient.miskeyed) {
    const { receiptId } = await take(['card_machine']);
    await voidDeskReceipt(deps, receiptId, 'keyed as card, it was a bank transfer', clinic.people.desk);
  }
  await take(walker.patient.tenders);
}

const REFERENCE: Readonly<Record<DeskTenders[number], string | null>> = {
  cash: null,
  card_machine: 'slip',
  bank_transfer: 'transfer',
  cheque: 'cheque',
};

/** Cash comes in whole fifties, as people bring it; the last tender takes what is left, with change out of cash. */
function tendersFor(left: Minor, names: DeskTenders, seed: number) {
  const parts = splitEvenly(left, names.length);
  let rest = left;
  return names.map((tender, index) => {
    const last = index === names.length - 1;
    const share = last ? rest : (parts[index] ?? rest);
    const amountMinor =
      tender === 'cash'
        ? minor(last ? Math.ceil(share / 5_000) * 5_000 : Math.floor(share / 5_000) * 5_000)
        : share;
    rest = subtract(rest, amountMinor);
    const word = REFERENCE[tender];
    return { tender, amountMinor, ...(word === null ? {} : { reference: `${word} ${4_000 + seed * 7}` }) };
  });
}

/** The surgeon records the eyes of a day as done. */
export async function doEyes(
  deps: AppDeps,
  clinic: DemoClinic,
  walker: Walker,
  day: ClinicDate,
): Promise<void> {
  const { eyes } = await courseMoney(deps.db, deps, courseIdOf(walker));
  for (const eye of eyes) {
    if (eye.state !== 'planned' || eye.plannedOn !== day) continue;
    await recordEyeDone(deps, {
      courseId: courseIdOf(walker),
      eye: eye.eye,
      doneOn: day,
      overrideReason: undefined,
      actor: clinic.people[walker.patient.surgeon],
    });
  }
}

/** The next check-up. */
export async function visit(
  deps: AppDeps,
  clinic: DemoClinic,
  walker: Walker,
  day: ClinicDate,
): Promise<void> {
  await recordFollowUpVisit(deps, courseIdOf(walker), day, clinic.people.desk);
}

function courseIdOf(walker: Walker): number {
  if (walker.courseId === null) throw new Error(`${walker.patient.name.join(' ')} has no course yet`);
  return walker.courseId;
}
