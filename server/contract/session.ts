import { z } from 'zod';
import { ANY_STAFF, defineContract, ROLES } from './define.ts';
import { dayField, emailField, idField } from './fields.ts';

export const sessionSchema = z
  .object({
    person: z
      .object({
        userId: idField,
        name: z.string(),
        email: z.string(),
        roles: z.array(z.enum(ROLES)).readonly(),
      })
      .nullable(),
    sites: z
      .array(
        z.object({
          siteId: idField,
          code: z.string(),
          name: z.string(),
          zone: z.string(),
          businessDay: dayField,
        }),
      )
      .readonly(),
    /** Sent back in the header X-CSRF-Token with every request that is not GET. */
    csrfToken: z.string().nullable(),
    /** In demo mode only: the sign-ins of the demonstration. */
    demo: z
      .object({
        password: z.string(),
        people: z.array(z.object({ email: z.string(), name: z.string(), roles: z.array(z.enum(ROLES)) })),
      })
      .nullable(),
  })
  .meta({ id: 'Session' });

export type SessionView = z.output<typeof sessionSchema>;

export const signIn = defineContract({
  id: 'signIn',
  summary: 'Sign in; sets the session cookie and gives the CSRF token',
  method: 'post',
  path: '/api/session',
  access: { kind: 'public' },
  body: z.strictObject({ email: emailField, password: z.string().min(1, 'cannot be empty').max(200) }),
  response: sessionSchema,
  status: 201,
  problems: ['sign_in_failed', 'too_many_requests'],
});

export const getSession = defineContract({
  id: 'getSession',
  summary: 'Who is signed in; person is null for nobody',
  method: 'get',
  path: '/api/session',
  access: { kind: 'public' },
  response: sessionSchema,
});

export const signOut = defineContract({
  id: 'signOut',
  summary: 'End the session',
  method: 'delete',
  path: '/api/session',
  access: ANY_STAFF,
  response: z.undefined(),
  status: 204,
});
