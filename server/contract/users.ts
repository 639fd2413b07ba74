import { z } from 'zod';
import { defineContract, ROLES, staff } from './define.ts';
import { emailField, idField, instantField, lineField } from './fields.ts';

const MANAGER = staff('manager');
const rolesField = z.array(z.enum(ROLES)).min(1, 'choose at least one role').max(5);
const sitesField = z.array(idField).min(1, 'choose at least one site').max(100);
const passwordField = z.string().min(12, 'needs at least twelve characters').max(200);

export const userSchema = z
  .object({
    userId: idField,
    name: z.string(),
    email: z.string(),
    state: z.enum(['invited', 'active', 'left']),
    roles: z.array(z.enum(ROLES)),
    siteIds: z.array(idField),
    createdAt: instantField,
    leftAt: instantField.nullable(),
    version: z.int(),
  })
  .meta({ id: 'User' });

export type UserView = z.output<typeof userSchema>;

export const listUsers = defineContract({
  id: 'listUsers',
  summary: 'The people of the clinic',
  method: 'get',
  path: '/api/users',
  access: staff('manager', 'auditor'),
  response: z.object({ users: z.array(userSchema) }),
});

export const inviteUser = defineContract({
  id: 'inviteUser',
  summary: 'Invite somebody by mail with roles and sites',
  method: 'post',
  path: '/api/users',
  access: MANAGER,
  body: z.strictObject({ name: lineField(120), email: emailField, roles: rolesField, siteIds: sitesField }),
  response: userSchema,
  status: 201,
  problems: ['conflict', 'refused'],
});

export const changeUser = defineContract({
  id: 'changeUser',
  summary: 'Change somebody’s roles and sites; their sessions end',
  method: 'put',
  path: '/api/users/:userId',
  access: MANAGER,
  params: z.object({ userId: idField }),
  body: z.strictObject({ roles: rolesField, siteIds: sitesField, version: z.int() }),
  response: userSchema,
  problems: ['conflict', 'refused'],
});

export const leaveUser = defineContract({
  id: 'leaveUser',
  summary: 'Somebody leaves: access ends at once, history keeps the name',
  method: 'post',
  path: '/api/users/:userId/leave',
  access: MANAGER,
  params: z.object({ userId: idField }),
  response: userSchema,
  problems: ['refused'],
});

export const askPasswordReset = defineContract({
  id: 'askPasswordReset',
  summary: 'Send a link to set a new password; the answer is the same whether the address is known or not',
  method: 'post',
  path: '/api/password-resets',
  access: { kind: 'public' },
  body: z.strictObject({ email: emailField }),
  response: z.object({ sent: z.literal(true) }),
  status: 202,
  problems: ['too_many_requests'],
});

export const setPassword = defineContract({
  id: 'setPassword',
  summary: 'Set a password with the secret of an invitation or reset mail',
  method: 'post',
  path: '/api/passwords',
  access: { kind: 'public' },
  body: z.strictObject({ token: z.string().min(20).max(100), password: passwordField }),
  response: z.object({ email: z.string() }),
  problems: ['gone', 'too_many_requests'],
});
