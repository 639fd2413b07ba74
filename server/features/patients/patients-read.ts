import type { PatientSummary, PatientView, PrescriptionRecord } from '#contract/patients';
import type { Eye } from '#domain/eye';
import { type CurrencyCode, minor } from '#domain/money/index';
import { type QuoteState, stateOn } from '#domain/quotes/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { todayAt } from '#server/features/business-days/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { type Db, rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { courseMarks } from './course-marks.ts';
import {
  PATIENT_COLUMNS,
  type PatientRow,
  patientOf,
  patientRow,
  plansOf,
  type StoredPatient,
} from './patient-repository.ts';
import { searchTerms } from './search-terms.ts';

type ReadDeps = Pick<Deps, 'db' | 'clock'>;

/** A list longer than this asks for a narrower search. */
const LISTED = 60;

/** Patients of the actor's sites that fit what was typed, by name; with nothing typed, those taken up last. */
export async function readPatients(
  deps: ReadDeps,
  wanted: { readonly q: string | undefined; readonly siteId: number | undefined },
  actor: StaffActor,
): Promise<{ patients: PatientSummary[]; more: boolean }> {
  const siteIds = actor.siteIds.filter((id) => wanted.siteId === undefined || id === wanted.siteId);
  if (siteIds.length === 0) return { patients: [], more: false };
  const terms = searchTerms(wanted.q ?? '');
  const where = [`p.site_id IN (${siteIds.map(() => '?').join(', ')})`];
  const bindings: (string | number)[] = [...siteIds];
  if (terms.bornOn !== null) {
    where.push('p.born_on = ?');
    bindings.push(terms.bornOn);
  }
  if (terms.email !== null) {
    where.push('p.email LIKE ?');
    bindings.push(`${likeText(terms.email)}%`);
  }
  for (const word of terms.words) {
    where.push(
      '(p.family_name LIKE ? OR p.given_name LIKE ? OR p.family_name LIKE ? OR p.given_name LIKE ?)',
    );
    const start = `${likeText(word)}%`;
    bindings.push(start, start, `% ${start}`, `% ${start}`);
  }
  const searched = terms.bornOn !== null || terms.email !== null || terms.words.length > 0;
  const rows = await rawRows<StoredPatient>(
    deps.db,
    `SELECT ${PATIENT_COLUMNS} FROM patients p WHERE ${where.join(' AND ')}
     ORDER BY ${searched ? 'p.family_name, p.given_name, p.patient_id' : 'p.patient_id DESC'} LIMIT ${LISTED + 1}`,
    bindings,
  );
  const patients = rows.slice(0, LISTED).map(patientRow);
  return { patients: await summaries(deps, patients), more: rows.length > LISTED };
}

/** A term as LIKE takes it literally. */
function likeText(text: string): string {
  return text.replace(/[\\%_]/g, (character) => `\\${character}`);
}

async function summaries(deps: ReadDeps, patients: readonly PatientRow[]): Promise<PatientSummary[]> {
  const ids = patients.map((patient) => patient.patientId);
  const marks = await courseMarks(deps.db, ids);
  const quotes = await quotesOf(deps.db, ids);
  const days = await todaysOf(deps, patients);
  return patients.map((patient) => {
    const newest = quotes.find((quote) => quote.patientId === patient.patientId);
    const today = days.get(patient.siteId);
    return {
      patientId: patient.patientId,
      siteId: patient.siteId,
      givenName: patient.givenName,
      familyName: patient.familyName,
      bornOn: patient.bornOn,
      email: patient.email,
      phone: patient.phone,
      course: marks.get(patient.patientId)?.[0] ?? null,
      quote:
        newest && today
          ? {
              quoteId: newest.quoteId,
              number: newest.number,
              state: stateOn(newest.state, newest.validUntil, today),
            }
          : null,
    };
  });
}

async function todaysOf(deps: ReadDeps, patients: readonly PatientRow[]): Promise<Map<number, ClinicDate>> {
  const days = new Map<number, ClinicDate>();
  for (const { siteId } of patients)
    if (!days.has(siteId)) days.set(siteId, await todayAt(deps.db, deps, siteId));
  return days;
}

/** A patient's page, bounded by the actor's sites. */
export async function readPatient(
  deps: ReadDeps,
  patientId: number,
  actor: StaffActor,
): Promise<PatientView> {
  const patient = await patientOf(deps.db, patientId);
  if (!patient) throw notFound('patient');
  mustWorkAt(actor, patient.siteId, 'patient');
  const today = await todayAt(deps.db, deps, patient.siteId);
  const [plans, prescriptions, marks, quotes] = await Promise.all([
    plansOf(deps.db, patientId),
    prescriptionRecords(deps.db, patientId),
    courseMarks(deps.db, [patientId]),
    quotesOf(deps.db, [patientId]),
  ]);
  return {
    ...patient,
    today,
    prescriptions,
    plans: plans.map((plan, index) => ({
      ...plan,
      procedureIds: { OD: [...plan.procedureIds.OD], OS: [...plan.procedureIds.OS] },
      good: index === 0 && plan.expiresOn >= today,
    })),
    quotes: quotes.map((quote) => ({
      quoteId: quote.quoteId,
      number: quote.number,
      state: stateOn(quote.state, quote.validUntil, today),
      changedAt: quote.changedAt,
      currency: quote.currency,
      totalsMinor: quote.totalsMinor.map(minor),
      validUntil: quote.validUntil,
      counsellor: quote.counsellor,
    })),
    courses: [...(marks.get(patientId) ?? [])],
  };
}

async function prescriptionRecords(db: Db, patientId: number): Promise<PrescriptionRecord[]> {
  const rows = await rawRows<{
    prescription_id: number;
    eye: Eye;
    typed_sphere_md: number;
    typed_cylinder_md: number | null;
    typed_axis_deg: number | null;
    sphere_md: number;
    cylinder_md: number;
    axis_deg: number | null;
    vertex_mm: number;
    refracted_on: ClinicDate;
    name: string;
    recorded_at: Instant;
  }>(
    db,
    `SELECT r.prescription_id, r.eye, r.typed_sphere_md, r.typed_cylinder_md, r.typed_axis_deg, r.sphere_md, r.cylinder_md,
            r.axis_deg, r.vertex_mm, r.refracted_on, u.name, r.recorded_at
     FROM prescriptions r JOIN users u ON u.user_id = r.recorded_by
     WHERE r.patient_id = ? ORDER BY r.prescription_id DESC`,
    [patientId],
  );
  return rows.map((row) => ({
    prescriptionId: row.prescription_id,
    eye: row.eye,
    typed: {
      sphereMd: row.typed_sphere_md,
      cylinderMd: row.typed_cylinder_md,
      axisDeg: row.typed_axis_deg,
    },
    minusForm: { sphereMd: row.sphere_md, cylinderMd: row.cylinder_md, axisDeg: row.axis_deg },
    vertexMm: row.vertex_mm,
    refractedOn: row.refracted_on,
    recordedBy: row.name,
    recordedAt: row.recorded_at,
  }));
}

interface QuoteOfPatient {
  readonly quoteId: number;
  readonly patientId: number;
  readonly number: string;
  readonly state: QuoteState;
  readonly changedAt: Instant;
  readonly currency: CurrencyCode | null;
  readonly totalsMinor: readonly number[];
  readonly validUntil: ClinicDate | null;
  readonly counsellor: string;
}

/** The quotes of some patients with the figures of their newest issued version, newest quote first. */
async function quotesOf(db: Db, patientIds: readonly number[]): Promise<QuoteOfPatient[]> {
  if (patientIds.length === 0) return [];
  const rows = await rawRows<{
    quote_id: number;
    patient_id: number;
    number: string;
    state: QuoteState;
    changed_at: Instant;
    currency: CurrencyCode | null;
    totals: string | null;
    valid_until: ClinicDate | null;
    counsellor: string;
  }>(
    db,
    `SELECT q.quote_id, q.patient_id, q.number, q.state, q.changed_at,
            JSON_VALUE(v.content, '$.options[0].priced.currency') AS currency,
            JSON_EXTRACT(v.content, '$.options[*].priced.totalMinor') AS totals, v.valid_until, u.name AS counsellor
     FROM quotes q
     JOIN users u ON u.user_id = q.counsellor_user_id
     LEFT JOIN quote_versions v ON v.quote_id = q.quote_id AND v.version_no =
       (SELECT MAX(n.version_no) FROM quote_versions n WHERE n.quote_id = q.quote_id)
     WHERE q.patient_id IN (${patientIds.map(() => '?').join(', ')})
     ORDER BY q.quote_id DESC`,
    patientIds,
  );
  return rows.map((row) => ({
    quoteId: row.quote_id,
    patientId: row.patient_id,
    number: row.number,
    state: row.state,
    changedAt: row.changed_at,
    currency: row.currency,
    totalsMinor: row.totals === null ? [] : (JSON.parse(row.totals) as number[]),
    validUntil: row.valid_until,
    counsellor: row.counsellor,
  }));
}
