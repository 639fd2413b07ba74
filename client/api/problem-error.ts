import { type ProblemBody, type ProblemCode, problemSchema } from '#contract/problem';

/** A refusal of the server, or the network being away, as screens show it. */
export class ProblemError extends Error {
  readonly status: number;
  readonly code: ProblemCode | 'network';
  readonly reason: string | undefined;
  readonly fields: readonly { readonly field: string; readonly message: string }[];

  constructor(status: number, code: ProblemCode | 'network', detail: string, body?: ProblemBody) {
    super(detail);
    this.status = status;
    this.code = code;
    this.reason = body?.reason;
    this.fields = body?.errors ?? [];
  }

  /** What is wrong with one field, undefined where nothing is. */
  fieldMessage(field: string): string | undefined {
    return this.fields.find((each) => each.field === field)?.message;
  }
}

/** Reads an answer that was no success. */
export async function problemOf(response: Response): Promise<ProblemError> {
  const parsed = problemSchema.safeParse(await response.json().catch(() => undefined));
  if (!parsed.success) {
    return new ProblemError(
      response.status,
      'internal',
      'The server answered something unexpected. Nothing was changed on this page.',
    );
  }
  return new ProblemError(response.status, parsed.data.code, parsed.data.detail, parsed.data);
}

/** The network did not carry the request, or not its answer. */
export function networkProblem(): ProblemError {
  return new ProblemError(
    0,
    'network',
    'The server cannot be reached just now. What you typed is kept; try again in a moment.',
  );
}
