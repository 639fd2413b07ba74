import { z } from 'zod';

/** Every code a problem can carry, with its HTTP status and title. Exhaustive: server and client share it. */
export const PROBLEMS = {
  bad_request: { status: 400, title: 'The request could not be read' },
  not_signed_in: { status: 401, title: 'Please sign in' },
  sign_in_failed: { status: 401, title: 'E-mail or password is wrong' },
  forbidden: { status: 403, title: 'Not for your role' },
  csrf_failed: { status: 403, title: 'The page is out of date' },
  not_found: { status: 404, title: 'Not found' },
  conflict: { status: 409, title: 'This has changed meanwhile' },
  gone: { status: 410, title: 'No longer open' },
  too_large: { status: 413, title: 'Too large' },
  unsupported: { status: 415, title: 'This kind of file or body is not taken here' },
  invalid_input: { status: 422, title: 'Something needs correcting' },
  refused: { status: 422, title: 'The rules do not allow this' },
  too_many_requests: { status: 429, title: 'Too many tries' },
  internal: { status: 500, title: 'Something failed on our side' },
  unavailable: { status: 503, title: 'Not reachable just now' },
} as const;

export type ProblemCode = keyof typeof PROBLEMS;

/** RFC 9457 problem details with our extensions. */
export const problemSchema = z
  .object({
    type: z.string(),
    title: z.string(),
    status: z.int(),
    code: z.enum(Object.keys(PROBLEMS) as [ProblemCode, ...ProblemCode[]]),
    detail: z.string(),
    reason: z.string().optional(),
    errors: z.array(z.object({ field: z.string(), message: z.string() })).optional(),
  })
  .meta({ id: 'Problem' });

export type ProblemBody = z.infer<typeof problemSchema>;
