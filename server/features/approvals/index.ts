export {
  type ApprovalAsked,
  type ApprovalKind,
  type ApprovalRow,
  approvedPayload,
  askApproval,
} from './approvals.ts';
export { approvalsRoutes } from './approvals-routes.ts';
