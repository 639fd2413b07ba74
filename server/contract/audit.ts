import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import { idField, instantField } from './fields.ts';

export const auditRowSchema = z
  .object({
    auditRowId: idField,
    recordedAt: instantField,
    actorKind: z.enum(['staff', 'patient', 'system']),
    by: z.string().nullable(),
    action: z.string(),
    subjectType: z.string(),
    subjectId: z.string(),
    siteName: z.string().nullable(),
    sealed: z.boolean(),
  })
  .meta({ id: 'AuditRow' });

export const listAuditRows = defineContract({
  id: 'listAuditRows',
  summary: 'The audit trail of the sites one works at, newest first',
  method: 'get',
  path: '/api/audit',
  access: staff('manager', 'auditor'),
  query: z.object({
    before: idField.optional(),
    subjectType: z.string().max(40).optional(),
    subjectId: z.string().max(64).optional(),
  }),
  response: z.object({ rows: z.array(auditRowSchema), more: z.boolean() }),
});
