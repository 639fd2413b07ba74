import type { CourseView } from '#contract/courses';
import type { Derivation } from '#domain/derivation';
import { ACCOUNT } from '#domain/ledger/index';
import { formatAmount, type Minor, minor, negate, subtract } from '#domain/money/index';
import { TENDER_LABEL, type Tender } from '#domain/payments/index';
import { formatDay } from '#domain/time/index';
import { courseBalance } from '#server/features/ledger/index';
import { type Db, rawRows, readMinor } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { type CourseMoney, courseMoney, unpaidOf } from './course-money.ts';

/** Everything the course's page shows, bounded by the caller. */
export async function readCourse(deps: Pick<Deps, 'db' | 'clock'>, courseId: number): Promise<CourseView> {
  const { db } = deps;
  const money = await courseMoney(db, deps, courseId);
  const names = await courseNames(db, courseId);
  const heldMinor = negate(await courseBalance(db, courseId, ACCOUNT.contractLiability));
  const { course } = money;
  return {
    courseId,
    number: course.number,
    siteId: course.siteId,
    patient: { patientId: course.patientId, name: names.patient, email: names.email },
    quoteId: course.quoteId,
    quoteNumber: names.quote,
    surgeonName: names.surgeon,
    currency: course.currency,
    acceptedOn: course.acceptedOn,
    totalMinor: course.totalMinor,
    paidMinor: money.paidMinor,
    creditMinor: money.creditMinor,
    dueNowMinor: money.dueNowMinor,
    dueNowWhy: dueNowWhy(money),
    leftMinor: money.leftMinor,
    leftWhy: leftWhy(money),
    eyes: money.eyes.map((eye) => {
      const share = money.paidFor.eyes.find((paid) => paid.eye === eye.eye);
      return {
        eye: eye.eye,
        state: eye.state,
        money: share?.money ?? 'none',
        procedureCode: eye.procedureCode,
        procedureName: eye.procedureLabel,
        plannedOn: eye.plannedOn,
        doneOn: eye.doneOn,
        priceMinor: eye.priceMinor,
        unpaidMinor: unpaidOf(money, eye.eye),
        unpaidWhy: unpaidWhy(money, eye.eye, eye.priceMinor, share?.paidMinor ?? minor(0)),
      };
    }),
    dues: money.dues.map((due) => ({
      dueNo: due.dueNo,
      kind: due.kind,
      label: due.label,
      dueOn: due.dueOn,
      amountMinor: due.amountMinor,
      paidMinor: money.paidFor.dues.find((paid) => paid.dueNo === due.dueNo)?.paidMinor ?? minor(0),
    })),
    receipts: await receiptLines(db, courseId),
    checkout: await latestCheckout(db, courseId),
    notOursYetMinor: heldMinor,
    notOursYetWhy: await heldWhy(db, money, heldMinor),
  };
}

async function courseNames(db: Db, courseId: number) {
  const [row] = await rawRows<{ patient: string; email: string | null; quote: string; surgeon: string }>(
    db,
    `SELECT CONCAT(p.given_name, ' ', p.family_name) AS patient, p.email, q.number AS quote, u.name AS surgeon
     FROM courses c JOIN patients p ON p.patient_id = c.patient_id JOIN quotes q ON q.quote_id = c.quote_id
     JOIN users u ON u.user_id = c.surgeon_user_id WHERE c.course_id = ?`,
    [courseId],
  );
  return row ?? { patient: '', email: null, quote: '', surgeon: '' };
}

async function receiptLines(db: Db, courseId: number): Promise<CourseView['receipts']> {
  const rows = await rawRows<{
    receipt_id: number;
    number: string;
    occurred_on: CourseView['acceptedOn'];
    total_minor: number;
    tenders: string;
    voided: number;
  }>(
    db,
    `SELECT r.receipt_id, r.number, r.occurred_on, r.total_minor,
            GROUP_CONCAT(t.tender ORDER BY t.tender_no) AS tenders, v.receipt_id IS NOT NULL AS voided
     FROM receipts r JOIN receipt_tenders t ON t.receipt_id = r.receipt_id
     LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
     WHERE r.course_id = ?
     GROUP BY r.receipt_id, r.number, r.occurred_on, r.total_minor, v.receipt_id ORDER BY r.receipt_id`,
    [courseId],
  );
  return rows.map((row) => ({
    receiptId: row.receipt_id,
    number: row.number,
    occurredOn: row.occurred_on,
    totalMinor: readMinor(row.total_minor),
    tenders: row.tenders.split(',').map((tender) => TENDER_LABEL[tender as Tender]),
    voided: row.voided === 1,
  }));
}

async function latestCheckout(db: Db, courseId: number): Promise<CourseView['checkout']> {
  const [row] = await rawRows<{ state: string; purpose: string; amount_minor: number; created_at: string }>(
    db,
    'SELECT state, purpose, amount_minor, created_at FROM checkout_attempts WHERE course_id = ? ORDER BY checkout_attempt_id DESC LIMIT 1',
    [courseId],
  );
  return row
    ? {
        state: row.state,
        purpose: row.purpose,
        amountMinor: readMinor(row.amount_minor),
        createdAt: row.created_at as NonNullable<CourseView['checkout']>['createdAt'],
      }
    : null;
}

function dueNowWhy(money: CourseMoney): Derivation {
  const due = money.dues.filter((row) => row.dueOn !== null && row.dueOn <= money.today);
  return {
    title: `${formatAmount(money.dueNowMinor, money.course.currency)} due today`,
    steps: [
      ...due.map((row) => ({
        label: `${row.label}, ${row.dueOn === null ? '' : formatDay(row.dueOn)}`,
        amountMinor: row.amountMinor,
      })),
      { label: 'Paid so far', amountMinor: negate(money.paidMinor) },
      { label: 'Due today', amountMinor: money.dueNowMinor },
    ],
  };
}

function leftWhy(money: CourseMoney): Derivation {
  return {
    title: `${formatAmount(money.leftMinor, money.course.currency)} left to pay`,
    steps: [
      { label: `Price of course ${money.course.number}`, amountMinor: money.course.totalMinor },
      { label: 'Paid so far', amountMinor: negate(money.paidMinor) },
      { label: 'Left to pay', amountMinor: money.leftMinor },
    ],
  };
}

function unpaidWhy(money: CourseMoney, eye: 'OD' | 'OS', priceMinor: Minor, paidMinor: Minor): Derivation {
  const unpaid = subtract(priceMinor, paidMinor);
  return {
    title: `${formatAmount(unpaid, money.course.currency)} before the ${eye === 'OD' ? 'right' : 'left'} eye may be done`,
    steps: [
      { label: 'Share of this eye', amountMinor: priceMinor },
      { label: 'Paid for it', amountMinor: negate(paidMinor), text: 'by day of surgery, right eye first' },
      { label: 'Unpaid', amountMinor: unpaid },
    ],
  };
}

async function heldWhy(db: Db, money: CourseMoney, heldMinor: Minor): Promise<Derivation> {
  const [row] = await rawRows<{ recognised: unknown }>(
    db,
    `SELECT SUM(r.amount_minor) AS recognised FROM recognitions r JOIN obligations o ON o.obligation_id = r.obligation_id
     WHERE o.course_id = ?`,
    [money.course.courseId],
  );
  const recognised = readMinor(row?.recognised);
  const rest = minor(heldMinor - money.paidMinor + recognised);
  return {
    title: `${formatAmount(heldMinor, money.course.currency)} is not ours yet`,
    steps: [
      { label: 'Paid towards the price', amountMinor: money.paidMinor },
      { label: 'Earned by what was delivered', amountMinor: negate(recognised) },
      ...(rest === 0 ? [] : [{ label: 'Delivered before it was paid, or tax', amountMinor: rest }]),
      { label: 'Held for what is still promised', amountMinor: heldMinor },
    ],
  };
}
