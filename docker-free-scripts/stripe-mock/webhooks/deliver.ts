import { SECOND_MS } from '#stand-ins/stripe-mock/clock/clock';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import { settingsOf } from '#stand-ins/stripe-mock/service';
import type { DeliveryAttempt, DeliveryRecord, TaskRecord } from '#stand-ins/stripe-mock/state/records';
import { recordAttempt } from './deliveries.ts';
import { signatureHeader } from './signature.ts';

const TIMEOUT_MS = 10 * SECOND_MS;
const STALE_BY_SECONDS = 3_600;
const WRONG_SECRET = 'whsec_this_is_not_the_right_secret';

/** One try at a delivery. A try broken off by `stopping` leaves no trace and is made again after the restart. */
export async function deliver(service: Service, task: TaskRecord, stopping: AbortSignal): Promise<void> {
  const delivery = service.store.get('deliveries', task.subject);
  const atMs = service.clock.nowMs();
  const outcome = await send(service, delivery, stopping);
  if (!stopping.aborted) recordAttempt(service, delivery, { atMs, ...outcome });
}

async function send(
  service: Service,
  delivery: DeliveryRecord,
  stopping: AbortSignal,
): Promise<Omit<DeliveryAttempt, 'atMs'>> {
  const { webhookUrl } = settingsOf(service);
  if (webhookUrl === null) return { status: null, error: 'No receiver is set' };
  const event = present(service, 'events', service.store.get('events', delivery.eventId));
  const body = JSON.stringify(event, null, 2);
  try {
    const response = await fetch(webhookUrl, {
      method: 'POST',
      headers: {
        'content-type': 'application/json; charset=utf-8',
        'stripe-signature': sign(service, delivery, body),
        'user-agent': 'local-stand-in/1.0',
      },
      body,
      redirect: 'manual',
      signal: AbortSignal.any([stopping, AbortSignal.timeout(TIMEOUT_MS)]),
    });
    await response.arrayBuffer();
    return { status: response.status, error: null };
  } catch (error) {
    return { status: null, error: describe(error) };
  }
}

/** Signed anew at every try; an ordered twist spoils the first try only, so that the retry can heal it. */
function sign(service: Service, delivery: DeliveryRecord, body: string): string {
  const { signatureTime, webhookSecret } = settingsOf(service);
  const nowMs = signatureTime === 'clock' ? service.clock.nowMs() : Date.now();
  const twist = delivery.attempts.length === 0 ? delivery.twist : null;
  const at = Math.floor(nowMs / SECOND_MS) - (twist === 'stale_timestamp' ? STALE_BY_SECONDS : 0);
  return signatureHeader(body, twist === 'wrong_secret' ? WRONG_SECRET : webhookSecret, at);
}

function describe(error: unknown): string {
  const cause = error instanceof Error && error.cause instanceof Error ? error.cause : error;
  return cause instanceof Error ? cause.message || cause.name : String(cause);
}
