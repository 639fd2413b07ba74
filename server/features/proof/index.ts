export { computeProof, proofRoutes } from './proof-routes.ts';
