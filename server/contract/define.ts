import { z } from 'zod';
import type { ProblemCode } from './problem.ts';

/** What people of the clinic may be; roles combine. */
export const ROLES = ['counsellor', 'front_desk', 'surgeon', 'manager', 'auditor'] as const;
export type Role = (typeof ROLES)[number];

/** Who may call: anybody, the holder of a patient's link, or staff of any of the roles. */
export type Access = { readonly kind: 'public' } | { readonly kind: 'patient' } | StaffAccess;

export interface StaffAccess {
  readonly kind: 'staff';
  readonly roles: readonly Role[];
}

/** Staff of any role. */
export const ANY_STAFF: StaffAccess = { kind: 'staff', roles: ROLES };

/** Staff of one of these roles. */
export function staff(...roles: readonly Role[]): StaffAccess {
  return { kind: 'staff', roles };
}

type Shape = z.ZodObject | undefined;
export type Media = 'application/json' | 'application/pdf' | 'text/csv' | 'text/plain' | 'text/event-stream';

/** One operation of the API: the single description that server, client, tests and OpenAPI share. */
export interface Contract<
  P extends Shape = Shape,
  Q extends Shape = Shape,
  B extends z.ZodType | undefined = z.ZodType | undefined,
  R extends z.ZodType = z.ZodType,
  A extends Access = Access,
> {
  /** Unique, camelCase, a verb of the trade ("startDeposit"). OpenAPI's operationId. */
  readonly id: string;
  readonly summary: string;
  readonly method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  /** Express path with :params, below the origin ("/api/quotes/:quoteId"). */
  readonly path: string;
  readonly access: A;
  readonly params: P;
  readonly query: Q;
  readonly body: B;
  /** Parsed before sending, so that nothing leaves that the contract does not name. */
  readonly response: R;
  readonly status: 200 | 201 | 202 | 204;
  readonly produces: Media;
  /** Multipart with one file under this field name, beside the body's fields as JSON in "fields". */
  readonly upload: string | undefined;
  readonly problems: readonly ProblemCode[];
}

interface Definition<
  P extends Shape,
  Q extends Shape,
  B extends z.ZodType | undefined,
  R extends z.ZodType,
  A extends Access,
> {
  id: string;
  summary: string;
  method: Contract['method'];
  path: string;
  access: A;
  params?: P;
  query?: Q;
  body?: B;
  response: R;
  status?: Contract['status'];
  produces?: Media;
  upload?: string;
  problems?: readonly ProblemCode[];
}

/** Describes an operation. Defaults: status 200, JSON, no params, query or body. */
export function defineContract<
  P extends Shape = undefined,
  Q extends Shape = undefined,
  B extends z.ZodType | undefined = undefined,
  R extends z.ZodType = z.ZodType,
  A extends Access = Access,
>(definition: Definition<P, Q, B, R, A>): Contract<P, Q, B, R, A> {
  return {
    status: 200,
    produces: 'application/json',
    problems: [],
    upload: undefined,
    ...definition,
    params: definition.params as P,
    query: definition.query as Q,
    body: definition.body as B,
  };
}

type Parsed<S> = S extends z.ZodType ? z.output<S> : undefined;
type Typed<S> = S extends z.ZodType ? z.input<S> : undefined;

/** What a handler receives, parsed. */
export interface ContractInput<C extends Contract> {
  readonly params: Parsed<C['params']>;
  readonly query: Parsed<C['query']>;
  readonly body: Parsed<C['body']>;
}

/** What a caller hands in: only the parts the contract has. */
export type ContractCall<C extends Contract> = (C['params'] extends z.ZodType
  ? { params: Typed<C['params']> }
  : unknown) &
  (C['query'] extends z.ZodType ? { query?: Typed<C['query']> } : unknown) &
  (C['body'] extends z.ZodType ? { body: Typed<C['body']> } : unknown);

/** What a caller gets back. */
export type ContractResult<C extends Contract> = z.output<C['response']>;

/** Nothing comes back (204). */
export const nothing = z.undefined();
