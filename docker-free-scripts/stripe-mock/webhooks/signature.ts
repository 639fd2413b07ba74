import { createHmac } from 'node:crypto';

/**
 * The published scheme v1: HMAC-SHA256, in hexadecimal, over the time stamp, a point and the body as sent.
 *
 * @param atSeconds the time stamp, Unix seconds
 */
export function signatureHeader(body: string, secret: string, atSeconds: number): string {
  const signature = createHmac('sha256', secret).update(`${atSeconds}.${body}`).digest('hex');
  return `t=${atSeconds},v1=${signature}`;
}
