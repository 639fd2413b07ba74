import type { Readable } from 'node:stream';
import type { Request, Response } from 'express';
import type { z } from 'zod';
import type { Contract, ContractInput } from '#contract/define';
import type { PatientActor, StaffActor } from '#server/platform/actor';

/** The actor a contract's access promises its handler. */
export type ActorFor<C extends Contract> = C['access'] extends { kind: 'staff' }
  ? StaffActor
  : C['access'] extends { kind: 'patient' }
    ? PatientActor
    : StaffActor | PatientActor | undefined;

/** A file a handler sends back: always an attachment or a PDF shown by the browser, never sniffed. */
export interface FileBody {
  readonly bytes: Buffer | Readable;
  readonly filename: string;
  /** Shown in place instead of saved (PDF only). */
  readonly inline?: boolean;
}

/** A file that came with a multipart request, already checked for size. */
export interface UploadedFile {
  readonly bytes: Buffer;
  readonly filename: string;
}

export interface RouteRequest<C extends Contract> extends ContractInput<C> {
  readonly actor: ActorFor<C>;
  readonly file: UploadedFile | undefined;
  /** For the few handlers that need cookies, session or streams. */
  readonly raw: { readonly req: Request; readonly res: Response };
}

/** JSON contracts return what the response schema takes; file contracts a FileBody; streams write by themselves. */
export type RouteResult<C extends Contract> = C['produces'] extends 'application/json'
  ? z.input<C['response']>
  : FileBody | undefined;

export type Handler<C extends Contract> = (
  request: RouteRequest<C>,
) => Promise<RouteResult<C> | z.input<C['response']> | FileBody | undefined>;

/** A contract with its handler, as features export them. */
export interface BoundRoute {
  readonly contract: Contract;
  readonly handle: (request: RouteRequest<Contract>) => Promise<unknown>;
}

/** Pairs a contract with its handler; types of params, query, body, actor and result follow from the contract. */
export function route<C extends Contract>(contract: C, handle: Handler<C>): BoundRoute {
  return { contract, handle: handle as unknown as BoundRoute['handle'] };
}
