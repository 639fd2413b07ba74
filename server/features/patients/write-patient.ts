import { type ClinicDate, formatDay } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { conflict, notFound, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { lockPatient } from './patient-repository.ts';

export interface PatientParticulars {
  readonly givenName: string;
  readonly familyName: string;
  readonly bornOn: ClinicDate;
  readonly email: string | null;
  readonly phone: string | null;
  readonly patientClass: string;
}

/**
 * Takes up a patient at a site and returns the key.
 * @throws Problem conflict 'patient_exists' when one of the same name and birthday is there, unless `evenSo`
 */
export async function createPatient(
  deps: Deps,
  wanted: PatientParticulars & { readonly siteId: number; readonly evenSo: boolean },
  actor: StaffActor,
): Promise<number> {
  const { siteId, evenSo, ...particulars } = wanted;
  mustWorkAt(actor, siteId, 'site');
  return await inTransaction(deps.db, async (trx) => {
    await mustBeBorn(trx, deps, siteId, particulars.bornOn);
    if (!evenSo) await mustBeNew(trx, siteId, particulars);
    const patientId = await insertRow(trx, 'patients', {
      site_id: siteId,
      ...columnsOf(particulars),
      created_at: sqlInstant(deps.clock.now()),
    });
    await recordAudit(trx, deps, {
      actor,
      action: 'patient.created',
      subjectType: 'patient',
      subjectId: patientId,
      siteId,
      after: particulars,
    });
    return patientId;
  });
}

/** Corrects particulars. @throws Problem conflict 'patient_changed' when the version read is no longer the newest */
export async function changePatient(
  deps: Deps,
  patientId: number,
  change: PatientParticulars & { readonly version: number },
  actor: StaffActor,
): Promise<void> {
  const { version, ...particulars } = change;
  await inTransaction(deps.db, async (trx) => {
    const before = await lockPatient(trx, patientId);
    if (!before) throw notFound('patient');
    mustWorkAt(actor, before.siteId, 'patient');
    if (before.version !== version) {
      throw conflict(
        'patient_changed',
        'Somebody else changed these particulars meanwhile. Look at them again; nothing of yours was saved.',
      );
    }
    await mustBeBorn(trx, deps, before.siteId, particulars.bornOn);
    await trx('patients')
      .where({ patient_id: patientId })
      .update({ ...columnsOf(particulars), version: version + 1 });
    await recordAudit(trx, deps, {
      actor,
      action: 'patient.changed',
      subjectType: 'patient',
      subjectId: patientId,
      siteId: before.siteId,
      before,
      after: particulars,
    });
  });
}

function columnsOf(particulars: PatientParticulars): Record<string, string | null> {
  return {
    given_name: particulars.givenName,
    family_name: particulars.familyName,
    born_on: particulars.bornOn,
    email: particulars.email,
    phone: particulars.phone,
    patient_class: particulars.patientClass,
  };
}

async function mustBeBorn(trx: Trx, deps: Deps, siteId: number, bornOn: ClinicDate): Promise<void> {
  const today = await todayAt(trx, deps, siteId);
  if (bornOn > today)
    throw refused('born_later', `${formatDay(bornOn)} has not come yet. Check the year.`, 'bornOn');
  if (bornOn < '1890-01-01')
    throw refused('born_too_early', `${formatDay(bornOn)} is too long ago. Check the year.`, 'bornOn');
}

async function mustBeNew(trx: Trx, siteId: number, wanted: PatientParticulars): Promise<void> {
  const [twin] = await rawRows<{ patient_id: number }>(
    trx,
    `SELECT patient_id FROM patients
     WHERE site_id = ? AND born_on = ? AND family_name = ? AND given_name = ? LIMIT 1`,
    [siteId, wanted.bornOn, wanted.familyName, wanted.givenName],
  );
  if (twin) {
    throw conflict(
      'patient_exists',
      `${wanted.givenName} ${wanted.familyName}, born ${formatDay(wanted.bornOn)}, is a patient here already. Open that page, or take up a second person of the same name.`,
    );
  }
}
