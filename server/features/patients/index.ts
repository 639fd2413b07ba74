export { approvePlan } from './approve-plan.ts';
export { courseMarks } from './course-marks.ts';
export {
  latestPrescriptions,
  lockPatient,
  newestPlan,
  type PatientRow,
  type PlanRow,
  patientOf,
  planInForce,
  type RecordedPrescription,
} from './patient-repository.ts';
export { patientsRoutes } from './patients-routes.ts';
export { recordPrescription } from './record-prescription.ts';
export { changePatient, createPatient } from './write-patient.ts';
