export { bankRoutes } from './bank-routes.ts';
export { type BankDeps, pullMovements } from './pull-movements.ts';
export { pullPayouts } from './pull-payouts.ts';
