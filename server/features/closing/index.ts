export { closeSiteDay, countDayComplete, enterBatch } from './close-day.ts';
export { closingRoutes } from './closing-routes.ts';
export { readDay } from './day-read.ts';
