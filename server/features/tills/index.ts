export { closeTillShift, countTillCash, explainTillDifference, moveCash, openTillShift } from './run-till.ts';
export {
  currencyOf,
  expectedCash,
  type TillSessionRow,
  tillSessionsOfDay,
  tillsOf,
} from './till-repository.ts';
export { tillsRoutes } from './tills-routes.ts';
