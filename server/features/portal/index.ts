export { patientOfRequest } from './patient-link.ts';
export { readPatientQuote } from './patient-quote-read.ts';
export { portalRoutes } from './portal-routes.ts';
