export { accrueCourseFees } from './accrue.ts';
export { agreeSurgeonFee, type FeeToAgree } from './agree-fee.ts';
export { readFeeMonth } from './fees-read.ts';
export { feesRoutes } from './fees-routes.ts';
