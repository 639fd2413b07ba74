export { deliveryRoutes } from './delivery-routes.ts';
export { type EyeDone, recordEyeDone } from './mark-eye-done.ts';
export { type OpenObligation, openObligations, recogniseDelivered } from './recognise.ts';
export { recordFollowUpVisit } from './record-visit.ts';
