import type { Server } from 'node:http';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import type { ErrorRequestHandler, Router } from 'express';
import express from 'express';
import { ApiError } from '#stand-ins/stripe-mock/api/errors';

/** Errors in the published shape; what is no refusal of ours is a defect and says so. */
const answerError: ErrorRequestHandler = (error: unknown, _request, response, _next) => {
  const refusal = error instanceof ApiError ? error : null;
  const status = refusal?.status ?? (hasStatus(error) ? error.status : 500);
  const message = error instanceof Error ? error.message : 'Unknown error';
  response.status(status).json({ error: refusal?.body ?? { type: 'api_error', message } });
};

function hasStatus(error: unknown): error is { status: number } {
  return typeof error === 'object' && error !== null && 'status' in error && typeof error.status === 'number';
}

export interface Mount {
  readonly path: string;
  readonly router: Router;
}

export function createHttpServer(mounts: readonly Mount[]): Server {
  const app = express();
  app.disable('x-powered-by');
  // Lists and bounds come in brackets: expand[], created[gte].
  app.set('query parser', 'extended');
  for (const { path, router } of mounts) app.use(path, router);
  app.use((request, response) => {
    response
      .status(404)
      .json({ error: { type: 'invalid_request_error', message: `Nothing at ${request.path}` } });
  });
  app.use(answerError);
  return createServer(app);
}

/** @returns the address, without a trailing slash, once the server takes connections */
export function listen(server: Server, host: string, port: number): Promise<string> {
  return new Promise((resolve, reject) => {
    server.once('error', reject);
    server.listen(port, host, () => {
      server.off('error', reject);
      resolve(`http://${host}:${(server.address() as AddressInfo).port}`);
    });
  });
}

/** Takes no more connections and drops those still open, kept-alive and hanging ones included. */
export function close(server: Server): Promise<void> {
  return new Promise((resolve) => {
    server.close(() => resolve());
    server.closeAllConnections();
  });
}
