import type { TodayView } from '#contract/today';
import type { Eye } from '#domain/eye';
import { currencyCode, formatAmount, type Minor, negate, sum } from '#domain/money/index';
import { type ClinicDate, type Instant, instantAt } from '#domain/time/index';
import { todayAt, zoneOf } from '#server/features/business-days/index';
import { courseMoney, unpaidOf } from '#server/features/courses/index';
import { type Db, rawRows, readMinor, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';

type Read = Pick<Deps, 'db' | 'clock'>;

/** Everything the front desk needs of a day without leaving the page. */
export async function readToday(deps: Read, siteId: number, on: ClinicDate | undefined): Promise<TodayView> {
  const day = on ?? (await todayAt(deps.db, deps, siteId));
  const began = sqlInstant(instantAt(day, '00:00', await zoneOf(deps.db, siteId)));
  const [clinic] = await rawRows<{ currency: string }>(
    deps.db,
    'SELECT currency FROM clinics ORDER BY clinic_id LIMIT 1',
  );
  const [waiting] = await rawRows<{ n: number }>(
    deps.db,
    "SELECT COUNT(*) AS n FROM approvals WHERE site_id = ? AND state = 'asked'",
    [siteId],
  );
  return {
    siteId,
    day,
    currency: currencyCode(clinic?.currency ?? 'EUR'),
    surgery: await surgeryOn(deps, siteId, day),
    paidOnline: await paidOnline(deps.db, siteId, day),
    dueNow: await overdue(deps, siteId, day),
    accepted: await acceptedSince(deps.db, siteId, began),
    approvalsWaiting: waiting?.n ?? 0,
  };
}

async function surgeryOn(deps: Read, siteId: number, day: ClinicDate): Promise<TodayView['surgery']> {
  const rows = await rawRows<{
    course_id: number;
    number: string;
    patient_id: number;
    name: string;
    surgeon: string;
    eyes: string;
    procedures: string;
  }>(
    deps.db,
    `SELECT c.course_id, c.number, c.patient_id, CONCAT(p.given_name, ' ', p.family_name) AS name, u.name AS surgeon,
            GROUP_CONCAT(e.eye ORDER BY e.eye) AS eyes, GROUP_CONCAT(DISTINCT e.procedure_label ORDER BY e.eye SEPARATOR ' and ') AS procedures
     FROM course_eyes e JOIN courses c ON c.course_id = e.course_id JOIN patients p ON p.patient_id = c.patient_id
     JOIN users u ON u.user_id = c.surgeon_user_id
     WHERE c.site_id = ? AND ((e.state = 'planned' AND e.planned_on = ?) OR (e.state = 'done' AND e.done_on = ?))
     GROUP BY c.course_id, c.number, c.patient_id, p.given_name, p.family_name, u.name ORDER BY p.family_name, p.given_name`,
    [siteId, day, day],
  );
  const found: TodayView['surgery'] = [];
  for (const row of rows) {
    const money = await courseMoney(deps.db, deps, row.course_id);
    const eyesToday = row.eyes.split(',') as Eye[];
    const open = eyesToday.filter((eye) => money.eyes.find((each) => each.eye === eye)?.state === 'planned');
    const owedMinor = sum(open.map((eye) => unpaidOf(money, eye)));
    found.push({
      courseId: row.course_id,
      courseNumber: row.number,
      patientId: row.patient_id,
      patientName: row.name,
      surgeonName: row.surgeon,
      eyes: money.eyes.map((eye) => ({
        eye: eye.eye,
        state: eye.state,
        money: money.paidFor.eyes.find((each) => each.eye === eye.eye)?.money ?? 'none',
      })),
      eyesToday,
      procedures: row.procedures,
      owedMinor,
      owedWhy: {
        title: `${formatAmount(owedMinor, money.course.currency)} before the surgeon may start`,
        steps: [
          ...open.flatMap((eye) => {
            const share = money.eyes.find((each) => each.eye === eye)?.priceMinor ?? (0 as Minor);
            const paid = money.paidFor.eyes.find((each) => each.eye === eye)?.paidMinor ?? (0 as Minor);
            const name = eye === 'OD' ? 'Right eye' : 'Left eye';
            return [
              { label: `${name}, its share`, amountMinor: share },
              { label: `${name}, paid`, amountMinor: negate(paid) },
            ];
          }),
          { label: 'Owed before surgery', amountMinor: owedMinor },
        ],
      },
    });
  }
  return found;
}

async function paidOnline(db: Db, siteId: number, day: ClinicDate): Promise<TodayView['paidOnline']> {
  const rows = await rawRows<{
    receipt_id: number;
    number: string;
    course_id: number;
    name: string;
    purpose: string | null;
    total_minor: number;
    recorded_at: Instant;
  }>(
    db,
    `SELECT r.receipt_id, r.number, r.course_id, CONCAT(p.given_name, ' ', p.family_name) AS name, a.purpose, r.total_minor, r.recorded_at
     FROM receipts r JOIN receipt_tenders t ON t.receipt_id = r.receipt_id AND t.tender = 'online_card'
     JOIN patients p ON p.patient_id = r.patient_id LEFT JOIN checkout_attempts a ON a.receipt_id = r.receipt_id
     WHERE r.site_id = ? AND r.booked_on = ? ORDER BY r.receipt_id DESC`,
    [siteId, day],
  );
  return rows.map((row) => ({
    receiptId: row.receipt_id,
    number: row.number,
    courseId: row.course_id,
    patientName: row.name,
    purpose: row.purpose ?? 'payment',
    totalMinor: readMinor(row.total_minor),
    recordedAt: row.recorded_at,
  }));
}

/** Courses with sums due by the day beyond what was paid, without surgery on it. */
async function overdue(deps: Read, siteId: number, day: ClinicDate): Promise<TodayView['dueNow']> {
  const rows = await rawRows<{ course_id: number; number: string; name: string; since: ClinicDate }>(
    deps.db,
    `SELECT c.course_id, c.number, CONCAT(p.given_name, ' ', p.family_name) AS name, MIN(d.due_on) AS since
     FROM courses c JOIN patients p ON p.patient_id = c.patient_id JOIN course_dues d ON d.course_id = c.course_id AND d.due_on <= ?
     LEFT JOIN (SELECT r.course_id, SUM(r.applied_minor) AS paid FROM receipts r LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
                WHERE v.receipt_id IS NULL GROUP BY r.course_id) x ON x.course_id = c.course_id
     WHERE c.site_id = ? AND NOT EXISTS (SELECT 1 FROM course_eyes e WHERE e.course_id = c.course_id AND e.state = 'planned' AND e.planned_on = ?)
     GROUP BY c.course_id, c.number, p.given_name, p.family_name, x.paid HAVING SUM(d.amount_minor) > COALESCE(x.paid, 0) ORDER BY since, c.course_id LIMIT 50`,
    [day, siteId, day],
  );
  const found: TodayView['dueNow'] = [];
  for (const row of rows) {
    const money = await courseMoney(deps.db, deps, row.course_id);
    const firstOpen = money.dues.find(
      (due) =>
        (money.paidFor.dues.find((paid) => paid.dueNo === due.dueNo)?.paidMinor ?? 0) < due.amountMinor,
    );
    found.push({
      courseId: row.course_id,
      courseNumber: row.number,
      patientName: row.name,
      dueMinor: money.dueNowMinor,
      since: firstOpen?.dueOn ?? row.since,
    });
  }
  return found;
}

async function acceptedSince(db: Db, siteId: number, began: string): Promise<TodayView['accepted']> {
  const rows = await rawRows<{
    course_id: number;
    number: string;
    name: string;
    total_minor: number;
    created_at: Instant;
  }>(
    db,
    `SELECT c.course_id, c.number, CONCAT(p.given_name, ' ', p.family_name) AS name, c.total_minor, c.created_at
     FROM courses c JOIN patients p ON p.patient_id = c.patient_id WHERE c.site_id = ? AND c.created_at >= ? ORDER BY c.course_id DESC`,
    [siteId, began],
  );
  return rows.map((row) => ({
    courseId: row.course_id,
    courseNumber: row.number,
    patientName: row.name,
    totalMinor: readMinor(row.total_minor),
    acceptedAt: row.created_at,
  }));
}
