export { type AuditNote, recordAudit } from './record-audit.ts';
