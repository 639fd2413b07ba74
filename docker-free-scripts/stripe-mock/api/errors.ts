/** The published body of an error. */
export interface ErrorBody {
  readonly type: 'api_error' | 'card_error' | 'idempotency_error' | 'invalid_request_error';
  readonly message: string;
  readonly code?: string;
  readonly decline_code?: string;
  readonly param?: string;
}

/** An answer other than success, thrown from anywhere below a route. */
export class ApiError extends Error {
  readonly status: number;
  readonly body: ErrorBody;

  constructor(status: number, body: ErrorBody) {
    super(body.message);
    this.status = status;
    this.body = body;
  }
}

/**
 * A request that was refused before its work began: unreadable or missing parameters. Such an answer is not
 * kept under an idempotency key, so the corrected request may use the same key again.
 */
export class ParameterError extends ApiError {
  constructor(param: string, code: string, message: string) {
    super(400, { type: 'invalid_request_error', code, param, message });
  }
}

/** A well-formed request that the state of things does not allow; kept under its idempotency key. */
export function refused(message: string, details: { code?: string; param?: string } = {}): ApiError {
  return new ApiError(400, { type: 'invalid_request_error', message, ...details });
}

/** @param noun the object's published name in words, as in "No such refund: 're_1'" */
export function noSuch(noun: string, id: string, param = 'id', status = 404): ApiError {
  return new ApiError(status, {
    type: 'invalid_request_error',
    code: 'resource_missing',
    param,
    message: `No such ${noun}: '${id}'`,
  });
}
