import type { CourseMark } from '#contract/patients';
import type { Eye } from '#domain/eye';
import type { CurrencyCode } from '#domain/money/index';
import { paidFor } from '#domain/payments/index';
import type { ClinicDate } from '#domain/time/index';
import { type Db, rawRows, readMinor } from '#server/platform/db';

interface MarkRow {
  patient_id: number;
  course_id: number;
  number: string;
  currency: CurrencyCode;
  accepted_on: ClinicDate;
  total_minor: number;
  paid: unknown;
  eye: Eye;
  procedure_label: string;
  price_minor: number;
  state: 'planned' | 'done' | 'cancelled';
  planned_on: ClinicDate | null;
  done_on: ClinicDate | null;
}

/** The pair marks of every course of some patients, newest course first. */
export async function courseMarks(
  db: Db,
  patientIds: readonly number[],
): Promise<ReadonlyMap<number, readonly CourseMark[]>> {
  if (patientIds.length === 0) return new Map();
  const rows = await rawRows<MarkRow>(
    db,
    `SELECT c.patient_id, c.course_id, c.number, c.currency, c.accepted_on, c.total_minor,
            (SELECT SUM(r.applied_minor) FROM receipts r LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
             WHERE r.course_id = c.course_id AND v.receipt_id IS NULL) AS paid,
            e.eye, e.procedure_label, e.price_minor, e.state, e.planned_on, e.done_on
     FROM courses c JOIN course_eyes e ON e.course_id = c.course_id
     WHERE c.patient_id IN (${patientIds.map(() => '?').join(', ')})
     ORDER BY c.course_id DESC, e.eye`,
    patientIds,
  );
  const marks = new Map<number, CourseMark[]>();
  for (const eyes of byCourse(rows)) {
    const [first] = eyes;
    if (first) marks.set(first.patient_id, [...(marks.get(first.patient_id) ?? []), courseMark(first, eyes)]);
  }
  return marks;
}

function byCourse(rows: readonly MarkRow[]): MarkRow[][] {
  const courses = new Map<number, MarkRow[]>();
  for (const row of rows) courses.set(row.course_id, [...(courses.get(row.course_id) ?? []), row]);
  return [...courses.values()];
}

function courseMark(course: MarkRow, eyes: readonly MarkRow[]): CourseMark {
  const totalMinor = readMinor(course.total_minor);
  const paidMinor = readMinor(course.paid);
  const shares = eyes.map((eye) => ({
    eye: eye.eye,
    shareMinor: readMinor(eye.price_minor),
    surgeryOn: eye.done_on ?? eye.planned_on,
  }));
  const paid = paidFor({ totalMinor, eyes: shares }, [], paidMinor);
  return {
    courseId: course.course_id,
    number: course.number,
    acceptedOn: course.accepted_on,
    currency: course.currency,
    totalMinor,
    paidMinor,
    eyes: eyes.map((eye) => ({
      eye: eye.eye,
      state: eye.state,
      money: paid.eyes.find((share) => share.eye === eye.eye)?.money ?? 'none',
      procedure: eye.procedure_label,
      plannedOn: eye.planned_on,
      doneOn: eye.done_on,
    })),
  };
}
