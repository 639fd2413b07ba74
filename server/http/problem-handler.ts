import type { ErrorRequestHandler, RequestHandler } from 'express';
import { PROBLEMS, type ProblemBody, type ProblemCode } from '#contract/problem';
import type { Logger } from '#server/platform/log';
import { BrokenInvariant, Problem } from '#server/platform/problem';

/** Anything nobody bound, below /api. */
export const unknownRoute: RequestHandler = (req) => {
  throw new Problem('not_found', { detail: `There is nothing at ${req.method} ${req.path}.` });
};

/** The last handler: every error becomes problem+json; what is not a Problem is logged and told as 500 without detail. */
export function problemHandler(log: Logger): ErrorRequestHandler {
  return (error, _req, res, next) => {
    if (res.headersSent) {
      next(error);
      return;
    }
    const problem = asProblem(error);
    if (problem.code === 'internal') {
      log.error({ err: error, broken: error instanceof BrokenInvariant }, 'request failed');
    }
    if (problem.retryAfter !== undefined) res.setHeader('Retry-After', String(problem.retryAfter));
    res.setHeader('Cache-Control', 'no-store');
    res
      .status(PROBLEMS[problem.code].status)
      .type('application/problem+json')
      .send(JSON.stringify(problemBody(problem)));
  };
}

function asProblem(error: unknown): Problem {
  if (error instanceof Problem) return error;
  const code = bodyParserCode(error);
  if (code === 'not_found') return new Problem(code, { detail: 'There is no such file.' });
  if (code)
    return new Problem(code, {
      detail:
        code === 'too_large' ? 'The request is too large.' : 'The body could not be read. Is it valid JSON?',
    });
  return new Problem('internal', {
    detail: 'Something failed on our side; it has been noted. Nothing was half done. Please try again.',
  });
}

/** body-parser and Express raise http-errors with a 4xx status of their own. */
function bodyParserCode(error: unknown): ProblemCode | undefined {
  if (typeof error !== 'object' || error === null || !('status' in error)) return undefined;
  if (error.status === 404) return 'not_found';
  if (error.status === 413) return 'too_large';
  if (error.status === 415) return 'unsupported';
  return typeof error.status === 'number' && error.status >= 400 && error.status < 500
    ? 'bad_request'
    : undefined;
}

/** The RFC 9457 body of a problem. */
export function problemBody(problem: Problem): ProblemBody {
  const known = PROBLEMS[problem.code];
  return {
    type: `urn:tenderlight:problem:${problem.code.replaceAll('_', '-')}`,
    title: known.title,
    status: known.status,
    code: problem.code,
    detail: problem.message,
    ...(problem.reason === undefined ? {} : { reason: problem.reason }),
    ...(problem.fields.length === 0 ? {} : { errors: [...problem.fields] }),
  };
}
