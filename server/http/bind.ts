import type { Readable } from 'node:stream';
import type { NextFunction, Request, RequestHandler, Response, Router } from 'express';
import multer from 'multer';
import type { z } from 'zod';
import type { Contract } from '#contract/define';
import { type Actor, hasRole, type PatientActor, type StaffActor } from '#server/platform/actor';
import { Problem } from '#server/platform/problem';
import type { BoundRoute, FileBody, RouteRequest, UploadedFile } from './route.ts';

/** How the http layer learns who is calling; the users and portal features supply the two look-ups. */
export interface Identity {
  staffActor(req: Request): Promise<StaffActor | undefined>;
  patientActor(req: Request): Promise<PatientActor | undefined>;
  /** Throws csrf_failed when a writing request of a signed-in browser lacks its token. */
  checkCsrf(req: Request, actor: Actor | undefined): void;
}

const UPLOAD_LIMIT_BYTES = 25 * 1024 * 1024;
const upload = multer({
  storage: multer.memoryStorage(),
  limits: { fileSize: UPLOAD_LIMIT_BYTES, files: 1, fields: 4 },
});

/** Mounts every route: actor, role, CSRF, parsing, handler, parsed answer. Errors go to the problem handler. */
export function bindRoutes(router: Router, routes: readonly BoundRoute[], identity: Identity): void {
  for (const bound of routes) {
    const before: RequestHandler[] = bound.contract.upload ? [receiveFile(bound.contract.upload)] : [];
    router[bound.contract.method](
      bound.contract.path,
      guard(bound.contract, identity),
      ...before,
      answer(bound),
    );
  }
}

/** Who is calling, and may they: decided before a byte of the body is believed. */
function guard(contract: Contract, identity: Identity): RequestHandler {
  return async (req, res, next) => {
    const actor = await resolveActor(contract, req, identity);
    if (contract.method !== 'get') identity.checkCsrf(req, actor);
    res.locals.actor = actor;
    next();
  };
}

function answer({ contract, handle }: BoundRoute): RequestHandler {
  return async (req, res) => {
    const input = parseInput(contract, req);
    const file = (req as Request & { file?: { buffer: Buffer; originalname: string } }).file;
    const uploaded: UploadedFile | undefined = file
      ? { bytes: file.buffer, filename: file.originalname }
      : undefined;
    const request = { ...input, actor: res.locals.actor, file: uploaded, raw: { req, res } };
    const result = await handle(request as unknown as RouteRequest<Contract>);
    if (contract.produces === 'text/event-stream') return;
    if (contract.produces !== 'application/json') sendFile(res, contract, result as FileBody);
    else if (contract.status === 204) res.status(204).end();
    else res.status(contract.status).json(contract.response.parse(result));
  };
}

async function resolveActor(
  contract: Contract,
  req: Request,
  identity: Identity,
): Promise<Actor | undefined> {
  const { access } = contract;
  if (access.kind === 'public') return (await identity.staffActor(req)) ?? (await identity.patientActor(req));
  if (access.kind === 'patient') {
    const patient = await identity.patientActor(req);
    if (!patient)
      throw new Problem('not_signed_in', { detail: 'Please open the link from your e-mail again.' });
    return patient;
  }
  const actor = await identity.staffActor(req);
  if (!actor)
    throw new Problem('not_signed_in', {
      detail: 'Your session has ended or was never begun. Sign in; nothing was changed.',
    });
  if (!hasRole(actor, ...access.roles)) {
    throw new Problem('forbidden', {
      detail: `This is for ${access.roles.map((role) => role.replace('_', ' ')).join(', ')}.`,
    });
  }
  return actor;
}

function parseInput(contract: Contract, req: Request): { params: unknown; query: unknown; body: unknown } {
  return {
    params: parsePart(contract.params, req.params, ''),
    query: parsePart(contract.query, req.query, ''),
    body: parsePart(contract.body, contract.upload ? multipartFields(req) : req.body, ''),
  };
}

function multipartFields(req: Request): unknown {
  const text: unknown = (req.body as Record<string, unknown> | undefined)?.fields;
  if (text === undefined) return {};
  try {
    return JSON.parse(String(text));
  } catch {
    throw new Problem('bad_request', { detail: 'The part "fields" is not JSON.' });
  }
}

function parsePart(schema: z.ZodType | undefined, value: unknown, prefix: string): unknown {
  if (!schema) return undefined;
  const parsed = schema.safeParse(value ?? {});
  if (parsed.success) return parsed.data;
  const fields = parsed.error.issues.map((issue) => ({
    field:
      prefix +
      (issue.path.length > 0
        ? issue.path.join('.')
        : issue.code === 'unrecognized_keys'
          ? issue.keys.join(', ')
          : 'body'),
    message: issue.message,
  }));
  throw new Problem('invalid_input', {
    detail: `${fields.map((f) => `${f.field}: ${f.message}`).join('; ')}. Nothing was saved.`,
    fields,
  });
}

function receiveFile(field: string): RequestHandler {
  const receive = upload.single(field);
  return (req: Request, res: Response, next: NextFunction) => {
    receive(req, res, (error: unknown) => {
      if (error instanceof multer.MulterError && error.code === 'LIMIT_FILE_SIZE') {
        next(
          new Problem('too_large', {
            detail: 'The file is larger than 25 MB. Nothing was stored.',
            fields: [{ field, message: 'at most 25 MB' }],
          }),
        );
      } else if (error) {
        next(
          new Problem('bad_request', {
            detail: 'The upload could not be read. Nothing was stored.',
            fields: [{ field, message: 'send one file' }],
          }),
        );
      } else next();
    });
  };
}

function sendFile(res: Response, contract: Contract, body: FileBody): void {
  const name = body.filename.replace(/[^\w.-]+/g, '-');
  res.status(contract.status);
  res.setHeader(
    'Content-Type',
    contract.produces === 'application/pdf' ? 'application/pdf' : `${contract.produces}; charset=utf-8`,
  );
  res.setHeader('Content-Disposition', `${body.inline ? 'inline' : 'attachment'}; filename="${name}"`);
  res.setHeader('Cache-Control', 'private, no-store');
  if (Buffer.isBuffer(body.bytes)) res.send(body.bytes);
  else (body.bytes as Readable).pipe(res);
}
