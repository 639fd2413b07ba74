import { addMs } from '#domain/time/index';
import type { AppDeps } from '#server/app';
import { sealRows } from '#server/features/audit/index';
import { pullMovements, pullPayouts } from '#server/features/bank/index';
import { type DocumentMakers, deliverDueMails } from '#server/features/documents/index';
import {
  type EventHandlers,
  handleDueEvents,
  PAYMENT_EVENTS,
  sweepCheckouts,
  sweepEvents,
} from '#server/features/payments/index';
import { lapseQuotes } from '#server/features/quotes/index';
import { pruneSessions } from '#server/features/users/index';
import { sqlInstant } from '#server/platform/db';
import { pruneCounters } from '#server/platform/rate-counters';
import type { Job } from './loop.ts';

/** Who acts on which of the processor's events; what nobody claims is handled by doing nothing. */
export function eventHandlers(): EventHandlers {
  const pull = async (deps: AppDeps): Promise<boolean> => {
    await pullMovements(deps);
    return true;
  };
  return {
    ...PAYMENT_EVENTS,
    'charge.updated': (deps) => pull(deps as AppDeps),
    'charge.succeeded': (deps) => pull(deps as AppDeps),
    'payout.': async (deps) => {
      await pullPayouts(deps as AppDeps);
      return true;
    },
  };
}

const SECOND = 1_000;
const MINUTE = 60 * SECOND;

/** Everything the house does by itself. Several processes may run the same jobs: each claims what it works on. */
export function allJobs(deps: AppDeps, makers: DocumentMakers): Job[] {
  const handlers = eventHandlers();
  const quiet = (work: Promise<unknown>): Promise<number> => work.then(() => 0);
  return [
    { name: 'events', everyMs: 500, run: () => handleDueEvents(deps, handlers) },
    { name: 'mails', everyMs: SECOND, run: () => deliverDueMails(deps, makers) },
    { name: 'seal', everyMs: 2 * SECOND, run: () => sealRows(deps) },
    { name: 'sweep-checkouts', everyMs: 15 * SECOND, run: () => quiet(sweepCheckouts(deps)) },
    { name: 'sweep-events', everyMs: 5 * MINUTE, run: () => quiet(sweepEvents(deps)) },
    { name: 'payouts', everyMs: 10 * MINUTE, run: () => quiet(pullPayouts(deps)) },
    { name: 'lapse-quotes', everyMs: 10 * MINUTE, run: () => quiet(lapseQuotes(deps)) },
    { name: 'prune', everyMs: 10 * MINUTE, run: () => quiet(prune(deps)) },
  ];
}

async function prune(deps: AppDeps): Promise<void> {
  await pruneSessions(deps.db, deps.clock);
  await pruneCounters(deps.db, deps.clock);
  await deps
    .db('live_hints')
    .where('created_at', '<', sqlInstant(addMs(deps.clock.now(), -60 * MINUTE)))
    .delete();
}
