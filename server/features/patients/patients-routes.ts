import * as contract from '#contract/patients';
import { type BoundRoute, route } from '#server/http/route';
import type { Deps } from '#server/platform/deps';
import { approvePlan } from './approve-plan.ts';
import { readPatient, readPatients } from './patients-read.ts';
import { recordPrescription } from './record-prescription.ts';
import { changePatient, createPatient } from './write-patient.ts';

export function patientsRoutes(deps: Deps): BoundRoute[] {
  return [
    route(
      contract.listPatients,
      async ({ query, actor }) => await readPatients(deps, { q: query.q, siteId: query.siteId }, actor),
    ),
    route(contract.createPatient, async ({ body, actor }) => {
      const patientId = await createPatient(deps, body, actor);
      return await readPatient(deps, patientId, actor);
    }),
    route(contract.getPatient, async ({ params, actor }) => await readPatient(deps, params.patientId, actor)),
    route(contract.changePatient, async ({ params, body, actor }) => {
      await changePatient(deps, params.patientId, body, actor);
      return await readPatient(deps, params.patientId, actor);
    }),
    route(contract.recordPrescription, async ({ params, body, actor }) => {
      await recordPrescription(deps, params.patientId, body, actor);
      return await readPatient(deps, params.patientId, actor);
    }),
    route(contract.approvePlan, async ({ params, body, actor }) => {
      const plan = { OD: body.OD, OS: body.OS, expiresOn: body.expiresOn };
      await approvePlan(deps, params.patientId, plan, actor);
      return await readPatient(deps, params.patientId, actor);
    }),
  ];
}
