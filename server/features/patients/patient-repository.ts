import type { Eye } from '#domain/eye';
import type { Prescription } from '#domain/prescription/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { type Db, rawRows, type Trx } from '#server/platform/db';

export interface PatientRow {
  readonly patientId: number;
  readonly siteId: number;
  readonly givenName: string;
  readonly familyName: string;
  readonly bornOn: ClinicDate;
  readonly email: string | null;
  readonly phone: string | null;
  readonly patientClass: string;
  readonly createdAt: Instant;
  readonly version: number;
}

/** A prescription as it was typed. */
export interface RecordedPrescription extends Prescription {
  readonly prescriptionId: number;
  readonly refractedOn: ClinicDate;
}

export interface PlanRow {
  readonly approvedPlanId: number;
  readonly surgeonUserId: number;
  readonly surgeonName: string;
  readonly approvedOn: ClinicDate;
  readonly expiresOn: ClinicDate;
  /** Rule ids of the price book's procedures. */
  readonly procedureIds: { readonly OD: readonly string[]; readonly OS: readonly string[] };
}

export interface StoredPatient {
  patient_id: number;
  site_id: number;
  given_name: string;
  family_name: string;
  born_on: ClinicDate;
  email: string | null;
  phone: string | null;
  patient_class: string;
  created_at: Instant;
  version: number;
}

export const PATIENT_COLUMNS =
  'p.patient_id, p.site_id, p.given_name, p.family_name, p.born_on, p.email, p.phone, p.patient_class, p.created_at, p.version';

export function patientRow(row: StoredPatient): PatientRow {
  return {
    patientId: row.patient_id,
    siteId: row.site_id,
    givenName: row.given_name,
    familyName: row.family_name,
    bornOn: row.born_on,
    email: row.email,
    phone: row.phone,
    patientClass: row.patient_class,
    createdAt: row.created_at,
    version: row.version,
  };
}

async function patientWhere(
  trx: Db | Trx,
  where: string,
  patientId: number,
): Promise<PatientRow | undefined> {
  const [row] = await rawRows<StoredPatient>(
    trx,
    `SELECT ${PATIENT_COLUMNS} FROM patients p WHERE ${where}`,
    [patientId],
  );
  return row ? patientRow(row) : undefined;
}

/** A patient by key; undefined when there is none. */
export async function patientOf(trx: Db | Trx, patientId: number): Promise<PatientRow | undefined> {
  return await patientWhere(trx, 'p.patient_id = ?', patientId);
}

/** A patient locked until the end of the transaction. */
export async function lockPatient(trx: Trx, patientId: number): Promise<PatientRow | undefined> {
  return await patientWhere(trx, 'p.patient_id = ? FOR UPDATE', patientId);
}

/** The newest prescription of each eye, as typed; an eye without one is left out. */
export async function latestPrescriptions(
  trx: Db | Trx,
  patientId: number,
): Promise<Partial<Record<Eye, RecordedPrescription>>> {
  const rows = await rawRows<{
    prescription_id: number;
    eye: Eye;
    typed_sphere_md: number;
    typed_cylinder_md: number | null;
    typed_axis_deg: number | null;
    vertex_mm: number;
    refracted_on: ClinicDate;
  }>(
    trx,
    `SELECT prescription_id, eye, typed_sphere_md, typed_cylinder_md, typed_axis_deg, vertex_mm, refracted_on
     FROM prescriptions WHERE prescription_id IN
       (SELECT MAX(prescription_id) FROM prescriptions WHERE patient_id = ? GROUP BY eye)`,
    [patientId],
  );
  return Object.fromEntries(
    rows.map((row): [Eye, RecordedPrescription] => [
      row.eye,
      {
        prescriptionId: row.prescription_id,
        sphereMd: row.typed_sphere_md,
        cylinderMd: row.typed_cylinder_md,
        axisDeg: row.typed_axis_deg,
        vertexMm: row.vertex_mm,
        refractedOn: row.refracted_on,
      },
    ]),
  );
}

/** Approved plans, newest first. */
export async function plansOf(trx: Db | Trx, patientId: number): Promise<PlanRow[]> {
  const rows = await rawRows<{
    approved_plan_id: number;
    surgeon_user_id: number;
    name: string;
    approved_on: ClinicDate;
    expires_on: ClinicDate;
    od_procedures: string;
    os_procedures: string;
  }>(
    trx,
    `SELECT a.approved_plan_id, a.surgeon_user_id, u.name, a.approved_on, a.expires_on, a.od_procedures, a.os_procedures
     FROM approved_plans a JOIN users u ON u.user_id = a.surgeon_user_id
     WHERE a.patient_id = ? ORDER BY a.approved_plan_id DESC`,
    [patientId],
  );
  return rows.map((row) => ({
    approvedPlanId: row.approved_plan_id,
    surgeonUserId: row.surgeon_user_id,
    surgeonName: row.name,
    approvedOn: row.approved_on,
    expiresOn: row.expires_on,
    procedureIds: {
      OD: JSON.parse(row.od_procedures) as string[],
      OS: JSON.parse(row.os_procedures) as string[],
    },
  }));
}

/** The surgeon's last word, good or run out. */
export async function newestPlan(trx: Db | Trx, patientId: number): Promise<PlanRow | undefined> {
  return (await plansOf(trx, patientId))[0];
}

/** The newest plan, where it is still good on a day; an older one never counts. */
export async function planInForce(
  trx: Db | Trx,
  patientId: number,
  day: ClinicDate,
): Promise<PlanRow | undefined> {
  const plan = await newestPlan(trx, patientId);
  return plan && plan.expiresOn >= day ? plan : undefined;
}
