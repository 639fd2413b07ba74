export { auditRoutes } from './audit-routes.ts';
export { type AuditNote, recordAudit } from './record-audit.ts';
export { chainHead, SEALED_TABLES, type SealFinding, sealEverything, sealRows, verifyChain } from './seal.ts';
