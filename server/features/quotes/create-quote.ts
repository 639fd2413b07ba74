import { EYES, type Eye } from '#domain/eye';
import {
  formatDioptres,
  formatPower,
  type Prescription,
  type PrescriptionFields,
} from '#domain/prescription/index';
import { newDraft } from '#domain/quotes/index';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { bookInForce } from '#server/features/catalogue/index';
import { takeNumber } from '#server/features/ledger/index';
import {
  latestPrescriptions,
  lockPatient,
  type PatientRow,
  planInForce,
} from '#server/features/patients/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';

/** Quotes count on over the years of a site: the year would make a short number long. */
const ALL_YEARS = 0;

/**
 * Begins a quote from what is known of the eyes and the surgeon's plan; returns its key. A draft that the same person began for
 * the patient and never touched is taken up again, so that a second click makes no second quote.
 */
export async function createQuote(deps: Deps, patientId: number, actor: StaffActor): Promise<number> {
  return await inTransaction(deps.db, async (trx) => {
    const patient = await lockPatient(trx, patientId);
    if (!patient) throw notFound('patient');
    mustWorkAt(actor, patient.siteId, 'patient');
    const untouched = await untouchedDraft(trx, patientId, actor.userId);
    if (untouched !== undefined) return untouched;
    const draft = await firstDraft(trx, deps, patient);
    const now = sqlInstant(deps.clock.now());
    const number = await nextNumber(trx, patient.siteId);
    const quoteId = await insertRow(trx, 'quotes', {
      site_id: patient.siteId,
      patient_id: patientId,
      number,
      state: 'draft',
      draft: JSON.stringify(draft),
      counsellor_user_id: actor.userId,
      created_at: now,
      changed_at: now,
    });
    await recordAudit(trx, deps, {
      actor,
      action: 'quote.created',
      subjectType: 'quote',
      subjectId: quoteId,
      siteId: patient.siteId,
      after: { number, patientId },
    });
    return quoteId;
  });
}

async function untouchedDraft(trx: Trx, patientId: number, userId: number): Promise<number | undefined> {
  const [row] = await rawRows<{ quote_id: number }>(
    trx,
    `SELECT quote_id FROM quotes
     WHERE patient_id = ? AND counsellor_user_id = ? AND state = 'draft' AND draft_version = 1
     ORDER BY quote_id DESC LIMIT 1`,
    [patientId, userId],
  );
  return row?.quote_id;
}

async function firstDraft(trx: Trx, deps: Deps, patient: PatientRow) {
  const today = await todayAt(trx, deps, patient.siteId);
  const { book } = await bookInForce(trx, patient.siteId, today);
  const known = await latestPrescriptions(trx, patient.patientId);
  const plan = await planInForce(trx, patient.patientId, today);
  const prescriptions: Partial<Record<Eye, PrescriptionFields>> = {};
  for (const eye of EYES) {
    const prescription = known[eye];
    if (prescription) prescriptions[eye] = asTyped(prescription);
  }
  return newDraft({ prescriptions, approved: plan?.procedureIds, priceListId: patient.patientClass, book });
}

/** A recorded prescription as it would be typed. */
function asTyped({ sphereMd, cylinderMd, axisDeg, vertexMm }: Prescription): PrescriptionFields {
  return {
    sphere: sphereMd === 0 ? formatDioptres(0) : formatPower(sphereMd),
    cylinder: cylinderMd === null ? '' : formatPower(cylinderMd),
    axis: axisDeg === null ? '' : String(axisDeg),
    vertex: vertexMm === 12 ? '' : String(vertexMm),
  };
}

async function nextNumber(trx: Trx, siteId: number): Promise<string> {
  const [site] = await rawRows<{ code: string }>(trx, 'SELECT code FROM sites WHERE site_id = ?', [siteId]);
  const no = await takeNumber(trx, siteId, ALL_YEARS, 'quote');
  return `${site?.code ?? siteId}-${String(no).padStart(4, '0')}`;
}
