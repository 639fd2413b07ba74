import type { ProblemCode } from '#contract/problem';

/** One field that was wrong and what to do about it. */
export interface FieldError {
  readonly field: string;
  readonly message: string;
}

/** What a Problem says besides its code. */
export interface ProblemDetails {
  /** What happened, what was kept, what to do: one or two sentences for a person. */
  readonly detail: string;
  /** The rule's own name for the refusal, stable for programs ("till_not_open"). */
  readonly reason?: string;
  readonly fields?: readonly FieldError[];
  /** Seconds after which trying again makes sense. */
  readonly retryAfter?: number;
}

/** An expected refusal that the person at the screen can act on. Becomes problem+json (RFC 9457). */
export class Problem extends Error {
  readonly code: ProblemCode;
  readonly reason: string | undefined;
  readonly fields: readonly FieldError[];
  readonly retryAfter: number | undefined;

  constructor(code: ProblemCode, details: ProblemDetails) {
    super(details.detail);
    this.code = code;
    this.reason = details.reason;
    this.fields = details.fields ?? [];
    this.retryAfter = details.retryAfter;
  }
}

/** The thing asked for is not there, or not for this person: the two are not told apart. */
export function notFound(what: string): Problem {
  return new Problem('not_found', {
    detail: `There is no such ${what}, or it belongs to a site you do not work at.`,
  });
}

/** A rule of the house said no; names the rule and, where there is one, the field. */
export function refused(reason: string, detail: string, field?: string): Problem {
  return new Problem('refused', {
    reason,
    detail,
    ...(field ? { fields: [{ field, message: detail }] } : {}),
  });
}

/** What was shown is no longer so; nothing was changed. */
export function conflict(reason: string, detail: string): Problem {
  return new Problem('conflict', { reason, detail });
}

/** An invariant of the house does not hold: a defect, logged and answered as 500, never explained to the browser. */
export class BrokenInvariant extends Error {}
