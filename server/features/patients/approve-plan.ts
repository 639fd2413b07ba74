import { EYES } from '#domain/eye';
import { addDays, type ClinicDate, formatDay } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { bookInForce } from '#server/features/catalogue/index';
import { mustBe, mustWorkAt, type StaffActor } from '#server/platform/actor';
import { insertRow, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { hint } from '#server/platform/live-hints';
import { type FieldError, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { lockPatient } from './patient-repository.ts';

/** How long a plan is good when the surgeon says nothing else; our choice, a refraction ages. */
const GOOD_FOR_DAYS = 90;
const AT_MOST_DAYS = 366;

/**
 * The surgeon's word on which procedures may be quoted for each eye; it replaces every plan before it. Whether an eye may be
 * treated at all stays the surgeon's decision, here it is only written down.
 *
 * @throws Problem refused 'no_procedure', 'unknown_procedure', 'bad_expiry', each naming its field
 */
export async function approvePlan(
  deps: Deps,
  patientId: number,
  plan: {
    readonly OD: readonly string[];
    readonly OS: readonly string[];
    readonly expiresOn: ClinicDate | undefined;
  },
  actor: StaffActor,
): Promise<void> {
  mustBe(actor, 'surgeon');
  await inTransaction(deps.db, async (trx) => {
    const patient = await lockPatient(trx, patientId);
    if (!patient) throw notFound('patient');
    mustWorkAt(actor, patient.siteId, 'patient');
    const today = await todayAt(trx, deps, patient.siteId);
    const { book } = await bookInForce(trx, patient.siteId, today);
    mustBeInBook(
      plan,
      book.procedures.map((procedure) => procedure.id),
    );
    const expiresOn = plan.expiresOn ?? addDays(today, GOOD_FOR_DAYS);
    mustEndSoon(expiresOn, today);
    const approvedPlanId = await insertRow(trx, 'approved_plans', {
      patient_id: patientId,
      od_procedures: JSON.stringify([...new Set(plan.OD)]),
      os_procedures: JSON.stringify([...new Set(plan.OS)]),
      surgeon_user_id: actor.userId,
      approved_at: sqlInstant(deps.clock.now()),
      approved_on: today,
      expires_on: expiresOn,
    });
    await recordAudit(trx, deps, {
      actor,
      action: 'plan.approved',
      subjectType: 'approved_plan',
      subjectId: approvedPlanId,
      siteId: patient.siteId,
      after: { patientId, OD: plan.OD, OS: plan.OS, expiresOn },
    });
    await hint(trx, deps.clock, { siteId: patient.siteId, topic: 'patient', subjectId: patientId });
  });
}

function mustBeInBook(
  plan: { readonly OD: readonly string[]; readonly OS: readonly string[] },
  procedureIds: readonly string[],
): void {
  if (plan.OD.length + plan.OS.length === 0)
    throw refused('no_procedure', 'Name at least one procedure for one eye.', 'OD');
  const fields: FieldError[] = EYES.flatMap((eye) =>
    plan[eye]
      .filter((id) => !procedureIds.includes(id))
      .map((id) => ({ field: eye, message: `The price book in force has no procedure "${id}".` })),
  );
  if (fields.length > 0) {
    throw new Problem('refused', {
      reason: 'unknown_procedure',
      detail: 'The plan names a procedure the price book does not have. Nothing was recorded.',
      fields,
    });
  }
}

function mustEndSoon(expiresOn: ClinicDate, today: ClinicDate): void {
  if (expiresOn < today)
    throw refused('bad_expiry', `${formatDay(expiresOn)} has passed. Choose a day to come.`, 'expiresOn');
  if (expiresOn > addDays(today, AT_MOST_DAYS))
    throw refused('bad_expiry', 'A plan is good for a year at most.', 'expiresOn');
}
