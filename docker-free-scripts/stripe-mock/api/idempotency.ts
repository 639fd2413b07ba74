import { createHash } from 'node:crypto';
import { DAY_MS } from '#stand-ins/stripe-mock/clock/clock';
import type { Service } from '#stand-ins/stripe-mock/service';
import { stamp } from '#stand-ins/stripe-mock/service';
import type { KeyRecord } from '#stand-ins/stripe-mock/state/records';
import { ApiError } from './errors.ts';

const KEPT_MS = DAY_MS;
const LONGEST_KEY = 255;

/** A call as far as its key is concerned. */
export interface KeyedCall {
  readonly key: string;
  readonly method: string;
  readonly path: string;
  readonly parameters: unknown;
}

/** Keys whose first call is not answered yet. They are no state: after a restart nothing is in flight. */
export type KeysInFlight = Set<string>;

/**
 * The first answer under the key, if it is to be given again.
 *
 * @throws ApiError 400 idempotency_error when the key belongs to another call, 409 while the first is in flight
 */
export function answerBefore(service: Service, inFlight: KeysInFlight, call: KeyedCall): KeyRecord | null {
  if (call.key.length > LONGEST_KEY) {
    throw new ApiError(400, {
      type: 'invalid_request_error',
      message: `Idempotency keys can be at most ${LONGEST_KEY} characters long.`,
    });
  }
  const known = service.store.find('keys', call.key);
  if (known !== undefined && service.clock.nowMs() - known.firstSeenMs < KEPT_MS) {
    if (known.endpoint !== endpointOf(call))
      throw otherUse(call.key, `endpoint they were first used for (${known.endpoint})`);
    if (known.fingerprint !== fingerprintOf(call))
      throw otherUse(call.key, 'parameters they were first used with');
    return known;
  }
  if (inFlight.has(call.key)) {
    throw new ApiError(409, {
      type: 'idempotency_error',
      code: 'idempotency_key_in_use',
      message: `There is currently another in-progress request using this Idempotent Key: ${call.key}. Please try again later.`,
    });
  }
  return null;
}

/** Keeps an answer under its key; call inside the transaction of the work it answers. */
export function keepAnswer(
  service: Service,
  call: KeyedCall,
  answer: { readonly requestId: string; readonly status: number; readonly body: string },
): void {
  service.store.put('keys', {
    ...stamp(service, call.key),
    fingerprint: fingerprintOf(call),
    endpoint: endpointOf(call),
    firstSeenMs: service.clock.nowMs(),
    ...answer,
  });
}

function endpointOf({ method, path }: KeyedCall): string {
  return `${method} ${path}`;
}

function fingerprintOf({ parameters }: KeyedCall): string {
  return createHash('sha256')
    .update(JSON.stringify(inOrder(parameters)))
    .digest('hex');
}

/** The order of parameters carries no meaning. */
function inOrder(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(inOrder);
  if (typeof value !== 'object' || value === null) return value ?? null;
  const entries = Object.entries(value).sort(([a], [b]) => (a < b ? -1 : 1));
  return entries.map(([name, member]) => [name, inOrder(member)]);
}

function otherUse(key: string, what: string): ApiError {
  return new ApiError(400, {
    type: 'idempotency_error',
    message: `Keys for idempotent requests can only be used with the same ${what}. Try using a key other than '${key}' if you meant to execute a different request.`,
  });
}
