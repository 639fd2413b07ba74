import express, { type RequestHandler, type Router } from 'express';

/** What the webhook needs from the payments feature: verify, store once. */
export interface WebhookSink {
  /** False when the signature is not the processor's. Storing the same event twice is one event. */
  take(rawBody: Buffer, signature: string): Promise<boolean>;
}

export const WEBHOOK_PATH = '/webhooks/stripe';

/**
 * Mounts the processor's webhook before any body parser: the signature covers the raw bytes. It answers 2xx as soon as the event
 * is stored; a worker acts on it later, from the object fetched anew.
 */
export function mountStripeWebhook(router: Router, sink: WebhookSink): void {
  const handler: RequestHandler = async (req, res) => {
    const taken = await sink.take(req.body as Buffer, req.header('stripe-signature') ?? '');
    res.status(taken ? 204 : 400).end();
  };
  router.post(WEBHOOK_PATH, express.raw({ type: () => true, limit: '1mb' }), handler);
}
