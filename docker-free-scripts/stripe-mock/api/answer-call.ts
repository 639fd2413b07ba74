import type { Service } from '#stand-ins/stripe-mock/service';
import type { RequestFaultKind, RequestFaultRecord } from '#stand-ins/stripe-mock/state/records';
import { ApiError, ParameterError } from './errors.ts';
import { expand } from './expand.ts';
import type { KeyedCall, KeysInFlight } from './idempotency.ts';
import { answerBefore, keepAnswer } from './idempotency.ts';
import type { Prepared, Route } from './route.ts';

export interface Call {
  readonly requestId: string;
  readonly route: Route;
  readonly id: string;
  readonly parameters: unknown;
  /** Present for POST requests that bring a key. */
  readonly keyed: KeyedCall | null;
  readonly fault: RequestFaultRecord | null;
}

export interface Answer {
  readonly status: number;
  readonly body: string;
  /** Id of the request first answered so, when this answer is given again. */
  readonly replayOf: string | null;
}

const INTERNAL_ERROR = new ApiError(500, {
  type: 'api_error',
  message: 'An unknown error occurred; the local stand-in was told to fail so.',
});

/** Errors a fault puts in the place of the work; what was ordered as 429 comes even before the key is looked at. */
const INSTEAD_OF_WORK: Partial<Record<RequestFaultKind, ApiError>> = {
  error_500_before: INTERNAL_ERROR,
  conflict_409: new ApiError(409, {
    type: 'invalid_request_error',
    code: 'lock_timeout',
    message: 'This object cannot be accessed right now because another request is currently accessing it.',
  }),
};

export const TOO_MANY_REQUESTS = new ApiError(429, {
  type: 'invalid_request_error',
  code: 'rate_limit',
  message: 'Request rate limit exceeded.',
});

/**
 * Answers a call once its caller is known: a repeated key gets its first answer, everything else is worked, in
 * one transaction with the keeping of its answer.
 *
 * @throws ApiError for answers that are kept under no key
 */
export async function answerCall(service: Service, inFlight: KeysInFlight, call: Call): Promise<Answer> {
  const { keyed, fault } = call;
  if (fault?.kind === 'rate_limit_429') throw TOO_MANY_REQUESTS;
  const first = keyed === null ? null : answerBefore(service, inFlight, keyed);
  if (first !== null) return { status: first.status, body: first.body, replayOf: first.requestId };
  if (keyed !== null) inFlight.add(keyed.key);
  try {
    const instead = fault === null ? undefined : INSTEAD_OF_WORK[fault.kind];
    if (instead !== undefined) throw instead;
    if (fault?.kind === 'delay') await pause(fault.delayMs);
    return { ...work(service, call), replayOf: null };
  } finally {
    if (keyed !== null) inFlight.delete(keyed.key);
  }
}

function work(service: Service, call: Call): { status: number; body: string } {
  const { keyed, fault, requestId } = call;
  const prepared = call.route.prepare(service, call.id, call.parameters);
  const keep = (status: number, body: object) => {
    const answer = { requestId, status, body: JSON.stringify(body, null, 2) };
    if (keyed !== null) keepAnswer(service, keyed, answer);
    return answer;
  };
  try {
    if (fault?.kind === 'error_500_stored') throw INTERNAL_ERROR;
    return service.store.transact(() => keep(200, run(service, call, prepared)));
  } catch (error) {
    if (!(error instanceof ApiError) || error instanceof ParameterError) throw error;
    return service.store.transact(() => keep(error.status, { error: error.body }));
  }
}

function run(service: Service, { requestId, keyed }: Call, prepared: Prepared): object {
  service.request = { id: requestId, idempotencyKey: keyed?.key ?? null };
  try {
    const answer = prepared.work();
    return prepared.expand.length === 0 ? answer : expand(service, answer, prepared.expand);
  } finally {
    service.request = null;
  }
}

function pause(ms: number): Promise<void> {
  return new Promise((resolve) => setTimeout(resolve, ms));
}
