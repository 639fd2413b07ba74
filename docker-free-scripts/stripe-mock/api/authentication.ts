import { createHash, timingSafeEqual } from 'node:crypto';
import type { Service } from '#stand-ins/stripe-mock/service';
import { ApiError } from './errors.ts';

/** @throws ApiError 401 unless the header carries the secret key, as bearer token or as basic user name */
export function authenticate(service: Service, header: string | undefined): void {
  const given = keyOf(header);
  if (given === null) {
    throw new ApiError(401, {
      type: 'invalid_request_error',
      message:
        'You did not provide an API key. You need to provide your API key in the Authorization header, using Bearer auth.',
    });
  }
  if (!timingSafeEqual(digest(given), digest(service.secretKey))) {
    throw new ApiError(401, { type: 'invalid_request_error', message: 'Invalid API Key provided.' });
  }
}

function keyOf(header: string | undefined): string | null {
  const [scheme, value] = header?.split(' ') ?? [];
  if (value === undefined || value === '') return null;
  if (scheme === 'Bearer') return value;
  return scheme === 'Basic' ? (Buffer.from(value, 'base64').toString().split(':')[0] ?? null) : null;
}

function digest(text: string): Buffer {
  return createHash('sha256').update(text).digest();
}
