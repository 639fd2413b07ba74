import { EYES, type Eye } from '#domain/eye';
import {
  minusForm,
  type Prescription,
  type PrescriptionFields,
  parsePrescriptionFields,
} from '#domain/prescription/index';
import type { ClinicDate } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { insertRow, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { type FieldError, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { lockPatient } from './patient-repository.ts';

export interface PrescriptionsTyped {
  readonly refractedOn: ClinicDate;
  readonly OD: PrescriptionFields | null;
  readonly OS: PrescriptionFields | null;
}

/**
 * Records what was refracted, one eye or both: as typed, and in the minus-cylinder form beside it.
 * @throws Problem invalid_input naming each field ("OS.axis"), refused 'no_eye', 'refracted_later'
 */
export async function recordPrescription(
  deps: Deps,
  patientId: number,
  typed: PrescriptionsTyped,
  actor: StaffActor,
): Promise<void> {
  const prescriptions = readTyped(typed);
  await inTransaction(deps.db, async (trx) => {
    const patient = await lockPatient(trx, patientId);
    if (!patient) throw notFound('patient');
    mustWorkAt(actor, patient.siteId, 'patient');
    if (typed.refractedOn > (await todayAt(trx, deps, patient.siteId)))
      throw refused('refracted_later', 'A refraction cannot be of a day to come.', 'refractedOn');
    for (const { eye, prescription } of prescriptions) {
      const row = { patientId, eye, prescription, refractedOn: typed.refractedOn };
      const prescriptionId = await insertPrescription(trx, deps, row, actor);
      await recordAudit(trx, deps, {
        actor,
        action: 'prescription.recorded',
        subjectType: 'prescription',
        subjectId: prescriptionId,
        siteId: patient.siteId,
        after: row,
      });
    }
  });
}

function readTyped(typed: PrescriptionsTyped): { eye: Eye; prescription: Prescription }[] {
  const fields: FieldError[] = [];
  const read = EYES.flatMap((eye) => {
    const given = typed[eye];
    if (given === null) return [];
    const parsed = parsePrescriptionFields(given);
    if (parsed.ok) return [{ eye, prescription: parsed.prescription }];
    for (const { field, words, change } of parsed.refusals)
      fields.push({ field: `${eye}.${field}`, message: `${words} ${change}` });
    return [];
  });
  if (fields.length > 0) {
    throw new Problem('invalid_input', {
      detail: `${fields.map((each) => `${each.field}: ${each.message}`).join(' ')} Nothing was recorded.`,
      fields,
    });
  }
  if (read.length === 0) throw refused('no_eye', 'Type the refraction of at least one eye.', 'OD');
  return read;
}

async function insertPrescription(
  trx: Trx,
  deps: Deps,
  given: {
    readonly patientId: number;
    readonly eye: Eye;
    readonly prescription: Prescription;
    readonly refractedOn: ClinicDate;
  },
  actor: StaffActor,
): Promise<number> {
  const { prescription } = given;
  const normal = minusForm(prescription);
  return await insertRow(trx, 'prescriptions', {
    patient_id: given.patientId,
    eye: given.eye,
    typed_sphere_md: prescription.sphereMd,
    typed_cylinder_md: prescription.cylinderMd,
    typed_axis_deg: prescription.axisDeg,
    sphere_md: normal.sphereMd,
    cylinder_md: normal.cylinderMd,
    axis_deg: normal.axisDeg,
    vertex_mm: prescription.vertexMm,
    refracted_on: given.refractedOn,
    recorded_by: actor.userId,
    recorded_at: sqlInstant(deps.clock.now()),
  });
}
