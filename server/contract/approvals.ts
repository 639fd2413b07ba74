import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import { idField, instantField, minorField, reasonField } from './fields.ts';

export const approvalSchema = z
  .object({
    approvalId: idField,
    kind: z.string(),
    subjectType: z.string(),
    subjectId: z.int(),
    siteId: idField,
    siteName: z.string(),
    amountMinor: minorField.nullable(),
    reason: z.string(),
    state: z.enum(['asked', 'approved', 'refused', 'withdrawn']),
    requestedBy: z.string(),
    requestedByMe: z.boolean(),
    requestedAt: instantField,
    decidedBy: z.string().nullable(),
    decidedAt: instantField.nullable(),
    decisionNote: z.string().nullable(),
  })
  .meta({ id: 'Approval' });

export type ApprovalView = z.output<typeof approvalSchema>;

export const listApprovals = defineContract({
  id: 'listApprovals',
  summary: 'What waits for a second person, and what was decided lately',
  method: 'get',
  path: '/api/approvals',
  access: staff('counsellor', 'front_desk', 'manager', 'auditor'),
  response: z.object({ approvals: z.array(approvalSchema) }),
});

export const decideApproval = defineContract({
  id: 'decideApproval',
  summary: 'Approve or refuse what another person asked for',
  method: 'post',
  path: '/api/approvals/:approvalId/decision',
  access: staff('manager'),
  params: z.object({ approvalId: idField }),
  body: z.strictObject({ approve: z.boolean(), note: reasonField.optional() }),
  response: approvalSchema,
  problems: ['refused', 'conflict'],
});
