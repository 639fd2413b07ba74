import type { Request, Response } from 'express';
import { Router, urlencoded } from 'express';
import { API_VERSION } from '#stand-ins/stripe-mock/serialise/event';
import type { Service } from '#stand-ins/stripe-mock/service';
import { stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type { Json, RequestFaultKind, RequestRecord } from '#stand-ins/stripe-mock/state/records';
import type { Answer } from './answer-call.ts';
import { answerCall } from './answer-call.ts';
import { authenticate } from './authentication.ts';
import { bookRoutes } from './book-routes.ts';
import { checkoutSessionRoutes } from './checkout-session-routes.ts';
import { ApiError } from './errors.ts';
import type { KeysInFlight } from './idempotency.ts';
import { moneyBackRoutes } from './money-back-routes.ts';
import { moneyInRoutes } from './money-in-routes.ts';
import { takeRequestFault } from './request-faults.ts';
import type { Route } from './route.ts';

export const ROUTES: readonly Route[] = [
  ...checkoutSessionRoutes,
  ...moneyInRoutes,
  ...moneyBackRoutes,
  ...bookRoutes,
];

const MOST_REMEMBERED = 5_000;

/** The API under /v1. Everything asked of it is recorded, answered or not. */
export function apiRoutes(service: Service): Router {
  const router = Router();
  const inFlight: KeysInFlight = new Set();
  router.use(urlencoded({ extended: true }));
  router.use(async (request: Request, response: Response) => {
    const requestId = newId('req');
    const { method } = request;
    const path = request.baseUrl + request.path;
    const fault = takeRequestFault(service, method, path);
    const parameters: Json = method === 'POST' ? (request.body ?? {}) : request.query;
    const record = remember(service, request, {
      id: requestId,
      method,
      path,
      parameters,
      fault: fault?.kind ?? null,
    });
    let answer: Answer;
    try {
      authenticate(service, request.header('authorization'));
      const { route, id } = routeOf(method, path);
      const key = request.header('idempotency-key');
      const keyed = method === 'POST' && key !== undefined ? { key, method, path, parameters } : null;
      answer = await answerCall(service, inFlight, { requestId, route, id, parameters, keyed, fault });
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      answer = { status: error.status, body: JSON.stringify({ error: error.body }, null, 2), replayOf: null };
    }
    service.store.transact(() =>
      service.store.put('requests', { ...record, status: answer.status, replayed: answer.replayOf !== null }),
    );
    send(request, response, { requestId, answer, fault: fault?.kind ?? null });
  });
  return router;
}

/** @throws ApiError 404, as published, for anything the stand-in does not know */
function routeOf(method: string, path: string): { route: Route; id: string } {
  const given = path.split('/');
  for (const route of ROUTES) {
    const wanted = route.path.split('/');
    const fits =
      route.method === method &&
      wanted.length === given.length &&
      wanted.every((part, index) => part === ':id' || part === given[index]);
    if (fits) return { route, id: given[wanted.indexOf(':id')] ?? '' };
  }
  throw new ApiError(404, {
    type: 'invalid_request_error',
    message: `Unrecognized request URL (${method}: ${path}). The local stand-in knows only what its application uses.`,
  });
}

type Remembered = Pick<RequestRecord, 'id' | 'method' | 'path' | 'parameters' | 'fault'>;

function remember(service: Service, request: Request, known: Remembered): RequestRecord {
  return service.store.transact(() => {
    const oldest = service.store.oldest('requests');
    if (oldest !== undefined && service.store.count('requests') >= MOST_REMEMBERED) {
      service.store.remove('requests', oldest.id);
    }
    return service.store.put('requests', {
      ...stamp(service, known.id),
      ...known,
      atMs: service.clock.nowMs(),
      idempotencyKey: request.header('idempotency-key') ?? null,
      apiVersion: request.header('stripe-version') ?? null,
      status: null,
      replayed: false,
    });
  });
}

interface Sending {
  readonly requestId: string;
  readonly answer: Answer;
  readonly fault: RequestFaultKind | null;
}

/** Sends the answer, unless a fault spoils the line after the work was done. */
function send(request: Request, response: Response, { requestId, answer, fault }: Sending): void {
  if (fault === 'commit_then_hang') return;
  if (fault === 'commit_then_reset') {
    request.socket.resetAndDestroy();
    return;
  }
  response.status(answer.status).set({
    'content-type': 'application/json',
    'request-id': requestId,
    'stripe-version': request.header('stripe-version') ?? API_VERSION,
  });
  const key = request.header('idempotency-key');
  if (key !== undefined) response.set('idempotency-key', key);
  if (answer.replayOf !== null)
    response.set({ 'idempotent-replayed': 'true', 'original-request': answer.replayOf });
  if (fault === 'commit_then_truncate') {
    const bytes = Buffer.from(answer.body);
    response.set('content-length', String(bytes.length));
    response.write(bytes.subarray(0, Math.floor(bytes.length / 2)), () => request.socket.destroy());
    return;
  }
  response.send(answer.body);
}
