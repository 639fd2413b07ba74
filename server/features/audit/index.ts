export { auditRoutes } from './audit-routes.ts';
export { type AuditNote, recordAudit } from './record-audit.ts';
export { chainHead, sealEverything, sealRows } from './seal.ts';
export { SEALED_TABLES } from './sealed-tables.ts';
export { type SealFinding, verifyChain } from './verify-chain.ts';
