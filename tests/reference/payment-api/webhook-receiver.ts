import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import Stripe from 'stripe';

export interface Received {
  readonly id: string;
  readonly type: string;
  readonly body: string;
  readonly signature: string;
  /** Whether the official SDK accepted the signature at the time given. */
  readonly genuine: boolean;
}

export interface WebhookReceiver {
  readonly url: string;
  readonly received: Received[];
  types(): string[];
  /** Status given to what comes next; 200 at first. */
  answerWith(status: number): void;
  close(): Promise<void>;
}

/**
 * A receiver that keeps what it hears and checks every signature with the official SDK.
 *
 * @param nowMs the receiver's time, which bounds the age of a signature
 */
export async function startWebhookReceiver(secret: string, nowMs: () => number): Promise<WebhookReceiver> {
  const received: Received[] = [];
  let status = 200;
  const server = createServer((request, response) => {
    const chunks: Buffer[] = [];
    request.on('data', (chunk: Buffer) => chunks.push(chunk));
    request.on('end', () => {
      const body = Buffer.concat(chunks).toString();
      const signature = String(request.headers['stripe-signature']);
      const { id, type } = JSON.parse(body) as { id: string; type: string };
      received.push({ id, type, body, signature, genuine: isGenuine(body, signature, secret, nowMs()) });
      response.writeHead(status).end();
    });
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}/webhook`,
    received,
    types: () => received.map(({ type }) => type),
    answerWith: (next) => {
      status = next;
    },
    close: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        server.closeAllConnections();
      }),
  };
}

function isGenuine(body: string, signature: string, secret: string, nowMs: number): boolean {
  try {
    Stripe.webhooks.constructEvent(body, signature, secret, 300, undefined, nowMs);
    return true;
  } catch {
    return false;
  }
}
