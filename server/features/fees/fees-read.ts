import type { FeeRowView } from '#contract/fees';
import type { Eye } from '#domain/eye';
import { ACCOUNT } from '#domain/ledger/index';
import { type CurrencyCode, currencyCode, formatAmount, minor, negate, sum, ZERO } from '#domain/money/index';
import { type ClinicDate, firstOfMonth, formatMonth, lastOfMonth } from '#domain/time/index';
import { courseMoney } from '#server/features/courses/index';
import { type Db, rawRows, readMinor } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { feeOf } from './accrue.ts';
import { agreementsOf, eyesWithoutFee } from './fee-repository.ts';

/** A surgeon's month: every eye with its fee and why, what came back, and what is held and why. */
export async function readFeeMonth(
  deps: Pick<Deps, 'db' | 'clock'>,
  surgeonUserId: number,
  month: ClinicDate,
) {
  const { db } = deps;
  const from = firstOfMonth(month);
  const to = lastOfMonth(month);
  const surgeon = await surgeonOf(db, surgeonUserId);
  const rows = [
    ...(await feeLines(db, surgeonUserId, from, to)),
    ...(await heldEyes(deps, surgeonUserId, from, to)),
  ];
  const accrued = rows.filter((row) => row.kind === 'accrual');
  const clawed = rows.filter((row) => row.kind === 'clawback');
  const accruedMinor = sum(accrued.map((row) => row.amountMinor));
  const clawedBackMinor = sum(clawed.map((row) => row.amountMinor));
  const totalMinor = minor(accruedMinor + clawedBackMinor);
  const currency = await clinicCurrency(db);
  return {
    surgeon,
    month: from,
    currency,
    agreementVersion:
      (await agreementsOf(db, surgeonUserId)).filter((each) => each.effectiveOn <= to).at(-1)?.versionNo ??
      null,
    eyes: accrued.length,
    accruedMinor,
    clawedBackMinor,
    heldCount: rows.filter((row) => row.kind === 'held').length,
    totalMinor,
    totalWhy: {
      title: `${formatAmount(totalMinor, currency)} for ${formatMonth(from)}`,
      steps: [
        { label: `${accrued.length} ${accrued.length === 1 ? 'eye' : 'eyes'}`, amountMinor: accruedMinor },
        ...(clawed.length === 0
          ? []
          : [{ label: `${clawed.length} clawed back`, amountMinor: clawedBackMinor }]),
        { label: 'Together', amountMinor: totalMinor },
      ],
    },
    rows: rows.sort((a, b) =>
      a.doneOn === b.doneOn ? a.courseId - b.courseId : a.doneOn < b.doneOn ? -1 : 1,
    ),
  };
}

async function surgeonOf(db: Db, userId: number): Promise<{ userId: number; name: string }> {
  const [row] = await rawRows<{ user_id: number; name: string }>(
    db,
    `SELECT u.user_id, u.name FROM users u JOIN user_roles r ON r.user_id = u.user_id AND r.role = 'surgeon' WHERE u.user_id = ?`,
    [userId],
  );
  if (!row) throw notFound('surgeon');
  return { userId: row.user_id, name: row.name };
}

async function clinicCurrency(db: Db): Promise<CurrencyCode> {
  const [row] = await rawRows<{ currency: string }>(
    db,
    'SELECT currency FROM clinics ORDER BY clinic_id LIMIT 1',
  );
  return currencyCode(row?.currency ?? 'EUR');
}

interface LineRow {
  course_id: number;
  eye: Eye;
  kind: 'accrual' | 'clawback';
  amount_minor: number;
  earned_on: ClinicDate;
  derivation: string;
  procedure_label: string;
  initials: string;
}

async function feeLines(
  db: Db,
  surgeonUserId: number,
  from: ClinicDate,
  to: ClinicDate,
): Promise<FeeRowView[]> {
  const rows = await rawRows<LineRow>(
    db,
    `SELECT f.course_id, f.eye, f.kind, f.amount_minor, f.earned_on, f.derivation, e.procedure_label,
            CONCAT(LEFT(p.given_name, 1), '. ', LEFT(p.family_name, 1), '.') AS initials
     FROM fee_lines f JOIN course_eyes e ON e.course_id = f.course_id AND e.eye = f.eye
     JOIN courses c ON c.course_id = f.course_id JOIN patients p ON p.patient_id = c.patient_id
     WHERE f.surgeon_user_id = ? AND f.earned_on BETWEEN ? AND ?`,
    [surgeonUserId, from, to],
  );
  return rows.map((row) => {
    const { title, steps, note } = JSON.parse(row.derivation) as FeeRowView['why'];
    return {
      courseId: row.course_id,
      patientInitials: row.initials,
      procedureName: row.procedure_label,
      doneOn: row.earned_on,
      eye: row.eye,
      kind: row.kind,
      amountMinor: readMinor(row.amount_minor),
      heldReason: null,
      why: { title, steps, ...(note === undefined ? {} : { note }) },
      pair: [{ eye: row.eye, state: 'done' as const, money: 'whole' as const }],
    };
  });
}

async function heldEyes(
  deps: Pick<Deps, 'db' | 'clock'>,
  surgeonUserId: number,
  from: ClinicDate,
  to: ClinicDate,
): Promise<FeeRowView[]> {
  const held: FeeRowView[] = [];
  for (const eye of await eyesWithoutFee(deps.db, { surgeonUserId, from, to })) {
    const money = await courseMoney(deps.db, deps, eye.courseId);
    const outcome = await feeOf(deps.db, eye, money);
    const words =
      outcome?.state === 'held'
        ? outcome.words
        : outcome
          ? 'Accrues with the next change.'
          : 'No fee agreement was in force on this day.';
    held.push({
      courseId: eye.courseId,
      patientInitials: await initialsOf(deps.db, eye.courseId),
      procedureName: eye.procedureLabel,
      doneOn: eye.doneOn,
      eye: eye.eye,
      kind: 'held',
      amountMinor: ZERO,
      heldReason: words,
      why: outcome?.why ?? {
        title: 'Held',
        steps: [{ label: 'Agreement', text: 'none in force' }],
        note: words,
      },
      pair: [
        {
          eye: eye.eye,
          state: 'done',
          money: money.paidFor.eyes.find((each) => each.eye === eye.eye)?.money ?? 'none',
        },
      ],
    });
  }
  return held;
}

async function initialsOf(db: Db, courseId: number): Promise<string> {
  const [row] = await rawRows<{ initials: string }>(
    db,
    `SELECT CONCAT(LEFT(p.given_name, 1), '. ', LEFT(p.family_name, 1), '.') AS initials
     FROM courses c JOIN patients p ON p.patient_id = c.patient_id WHERE c.course_id = ?`,
    [courseId],
  );
  return row?.initials ?? '';
}

/** Surgeons and what each is owed by the ledger; `only` narrows to one. */
export async function readSurgeons(db: Db, only: number | undefined) {
  const rows = await rawRows<{ user_id: number; name: string; payable: unknown }>(
    db,
    `SELECT u.user_id, u.name, (SELECT SUM(l.amount_minor) FROM journal_lines l WHERE l.payee_id = u.user_id AND l.account_code = ?) AS payable
     FROM users u JOIN user_roles r ON r.user_id = u.user_id AND r.role = 'surgeon'
     WHERE (? IS NULL OR u.user_id = ?) ORDER BY u.name`,
    [ACCOUNT.surgeonFeesPayable, only ?? null, only ?? null],
  );
  const surgeons = [];
  for (const row of rows) {
    const latest = (await agreementsOf(db, row.user_id)).at(-1);
    surgeons.push({
      userId: row.user_id,
      name: row.name,
      payableMinor: negate(readMinor(row.payable)),
      agreementVersion: latest?.versionNo ?? null,
      agreedSince: latest?.effectiveOn ?? null,
    });
  }
  return { currency: await clinicCurrency(db), surgeons };
}
