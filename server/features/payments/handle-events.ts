import { addMs } from '#domain/time/index';
import { ProcessorError } from '#server/gateways/index';
import { applyCheckout, type PaymentDeps, reconcileCheckout } from './reconcile-checkout.ts';
import { type ClaimedEvent, claimEvents, finishEvent, retryEvent, storeEvent } from './stored-events.ts';

/** Acts on one kind of event by fetching the object anew; false when nothing of ours matches it. */
export type EventHandler = (deps: PaymentDeps, objectId: string) => Promise<boolean>;

/** Handlers by the beginning of the event's type; the longest match wins. */
export type EventHandlers = Readonly<Record<string, EventHandler>>;

/** What the payments feature itself listens to; other features add theirs in the composition root. */
export const PAYMENT_EVENTS: EventHandlers = {
  'checkout.session.': async (deps, sessionId) => (await reconcileCheckout(deps, sessionId)) !== undefined,
  'payment_intent.succeeded': async (deps, intentId) => {
    const checkout = await deps.gateways.stripe.checkoutOfIntent(intentId);
    return checkout !== undefined && (await applyCheckout(deps, checkout)) !== undefined;
  },
};

const BATCH = 20;

/** Takes a webhook's raw bytes: verified, stored once, acted on later. False when it is not the processor's. */
export async function takeWebhook(deps: PaymentDeps, rawBody: Buffer, signature: string): Promise<boolean> {
  const receivedAt = deps.clock.now();
  const event = deps.gateways.stripe.verifyEvent(rawBody, signature, receivedAt);
  if (!event) return false;
  await storeEvent(deps.db, event, receivedAt);
  return true;
}

/** Works through stored events; returns how many were taken up. */
export async function handleDueEvents(deps: PaymentDeps, handlers: EventHandlers): Promise<number> {
  const events = await claimEvents(deps.db, deps.clock.now(), BATCH);
  for (const event of events) await handleOne(deps, handlers, event);
  return events.length;
}

async function handleOne(deps: PaymentDeps, handlers: EventHandlers, event: ClaimedEvent): Promise<void> {
  const handler = handlerFor(handlers, event.type);
  try {
    const ours = handler === undefined || (await handler(deps, event.objectId));
    await finishEvent(deps.db, event.id, ours ? 'handled' : 'parked', deps.clock.now());
  } catch (error) {
    const reason =
      error instanceof ProcessorError ? error.code : error instanceof Error ? error.name : 'unknown';
    deps.log.warn({ event: event.id, type: event.type, tries: event.tries, reason }, 'event put back');
    const waitMs = Math.min(3_600_000, 2_000 * 2 ** Math.min(event.tries, 12));
    await retryEvent(deps.db, event.id, reason, addMs(deps.clock.now(), waitMs));
  }
}

function handlerFor(handlers: EventHandlers, type: string): EventHandler | undefined {
  const [best] = Object.keys(handlers)
    .filter((prefix) => type.startsWith(prefix))
    .sort((a, b) => b.length - a.length);
  return best === undefined ? undefined : handlers[best];
}
