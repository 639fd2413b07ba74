import type { Request, Response } from 'express';
import { json, Router } from 'express';
import type { z } from 'zod';
import { ApiError, noSuch } from '#stand-ins/stripe-mock/api/errors';
import type { Queue } from '#stand-ins/stripe-mock/clock/queue';
import { unschedule } from '#stand-ins/stripe-mock/clock/tasks';
import { decideDispute, openDispute, updateDispute } from '#stand-ins/stripe-mock/objects/disputes';
import { attachFee } from '#stand-ins/stripe-mock/objects/payments';
import {
  arrive,
  cancelPayout,
  failPayout,
  payOut,
  sendOnItsWay,
} from '#stand-ins/stripe-mock/objects/payouts';
import { failRefund, requireRefundAction, settleRefund } from '#stand-ins/stripe-mock/objects/refunds';
import type { PayerDesk } from '#stand-ins/stripe-mock/page/pay-as-payer';
import type { PublicKind } from '#stand-ins/stripe-mock/serialise/present';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import { settingsOf, stamp } from '#stand-ins/stripe-mock/service';
import { newId } from '#stand-ins/stripe-mock/state/ids';
import type { ChargeRecord, Collections, SettingsRecord } from '#stand-ins/stripe-mock/state/records';
import { releaseByType, retryNow } from '#stand-ins/stripe-mock/webhooks/deliveries';
import { advanceClock, readClock, resetClock, setClock } from './clock-control.ts';
import * as commands from './commands.ts';
import { dump } from './dump.ts';
import { pay } from './pay.ts';

export interface ControlParts {
  readonly service: Service;
  readonly queue: Queue;
  readonly desk: PayerDesk;
}

type Handler = (request: Request, response: Response) => Promise<void> | void;

/** The levers behind the service: nothing here exists in the real one. */
export function controlRoutes(parts: ControlParts): Router {
  const router = Router();
  router.use(json());
  clockRoutes(router, parts);
  settingRoutes(router, parts);
  moneyRoutes(router, parts);
  faultRoutes(router, parts);
  router.get('/control/dump', (_request, response) => {
    response.json(dump(parts.service));
  });
  router.get('/control/requests', (_request, response) => {
    response.json(parts.service.store.all('requests'));
  });
  router.post('/control/idle', async (_request, response) => {
    await parts.queue.idle();
    response.json({});
  });
  router.post(
    '/control/sessions/:id/pay',
    taking(commands.payCommand, async (command, request, response) => {
      const { result, sentOn } = await pay(parts, idOf(request), command);
      response.once('close', sentOn);
      response.json(result);
    }),
  );
  return router;
}

function clockRoutes(router: Router, { service, queue }: ControlParts): void {
  router.get('/control/clock', (_request, response) => {
    response.json(readClock(service));
  });
  router.post(
    '/control/clock',
    taking(commands.setClockCommand, async ({ now, frozen }, _request, response) => {
      response.json(await setClock(service, queue, Date.parse(now), frozen));
    }),
  );
  router.post(
    '/control/clock/advance',
    taking(commands.advanceClockCommand, async ({ ms }, _request, response) => {
      response.json(await advanceClock(service, queue, ms));
    }),
  );
  router.post('/control/clock/reset', async (_request, response) => {
    response.json(await resetClock(service, queue));
  });
}

function settingRoutes(router: Router, { service }: ControlParts): void {
  const change = (response: Response, settings: Partial<SettingsRecord>) => {
    const changed = service.store.transact(() =>
      service.store.put('settings', { ...settingsOf(service), ...settings }),
    );
    const { webhookSecret: _, ...shown } = changed;
    response.json(shown);
  };
  router.post(
    '/control/webhook',
    taking(commands.webhookCommand, ({ url, secret, signatureTime }, _request, response) => {
      const settings = settingsOf(service);
      change(response, {
        webhookUrl: url,
        webhookSecret: secret ?? settings.webhookSecret,
        signatureTime: signatureTime ?? settings.signatureTime,
      });
    }),
  );
  router.post(
    '/control/settings',
    taking(commands.settingsCommand, (settings, _request, response) => {
      const given = Object.entries(settings).filter(([, value]) => value !== undefined);
      change(response, Object.fromEntries(given));
    }),
  );
}

function moneyRoutes(router: Router, { service }: ControlParts): void {
  /** A lever that moves one object, in one transaction, and shows it afterwards. */
  const lever = <K extends PublicKind>(
    path: string,
    kind: K,
    pull: (record: Collections[K]) => Collections[K] | undefined,
  ): void => {
    router.post(path, (request, response) => {
      const record = found(service, kind, idOf(request));
      const moved = service.store.transact(() => pull(record)) ?? service.store.get(kind, record.id);
      response.json(present(service, kind, moved));
    });
  };
  router.post(
    '/control/payouts',
    taking(commands.payoutCommand, ({ releasePending }, _request, response) => {
      const payouts = service.store.transact(() => {
        if (releasePending) makeAvailable(service);
        return payOut(service);
      });
      response.json(payouts.map((payout) => present(service, 'payouts', payout)));
    }),
  );
  lever('/control/payouts/:id/arrive', 'payouts', ({ id }) => {
    sendOnItsWay(service, id);
    arrive(service, id);
    return undefined;
  });
  lever('/control/payouts/:id/fail', 'payouts', (payout) => failPayout(service, payout));
  lever('/control/payouts/:id/cancel', 'payouts', (payout) => cancelPayout(service, payout));
  lever('/control/refunds/:id/settle', 'refunds', (refund) => settleRefund(service, refund));
  lever('/control/refunds/:id/fail', 'refunds', (refund) => failRefund(service, refund));
  lever('/control/refunds/:id/require-action', 'refunds', (refund) => requireRefundAction(service, refund));
  lever('/control/charges/:id/attach-fee', 'charges', ({ id }) => {
    unschedule(service, 'attach_fee', id);
    attachFee(service, id);
    return undefined;
  });
  router.post(
    '/control/payments/:id/dispute',
    taking(commands.disputeCommand, ({ amount, reason, inquiry }, request, response) => {
      const charge = chargeOf(service, idOf(request));
      const opening = { amount: amount ?? charge.amount, reason, inquiry };
      const dispute = service.store.transact(() => openDispute(service, charge, opening));
      response.json(present(service, 'disputes', dispute));
    }),
  );
  router.post(
    '/control/disputes/:id/respond',
    taking(commands.respondCommand, ({ text }, request, response) => {
      const dispute = found(service, 'disputes', idOf(request));
      const answer = { evidence: { uncategorized_text: text }, metadata: dispute.metadata, submit: true };
      const changed = service.store.transact(() => updateDispute(service, dispute, answer));
      response.json(present(service, 'disputes', changed));
    }),
  );
  router.post(
    '/control/disputes/:id/close',
    taking(commands.closeCommand, ({ won }, request, response) => {
      const dispute = found(service, 'disputes', idOf(request));
      const closed = service.store.transact(() => decideDispute(service, dispute, won));
      response.json(present(service, 'disputes', closed));
    }),
  );
}

function faultRoutes(router: Router, { service }: ControlParts): void {
  const { store } = service;
  router.post(
    '/control/faults',
    taking(commands.requestFaultCommand, (fault, _request, response) => {
      response.json(
        store.transact(() =>
          store.put('requestFaults', { ...stamp(service, newId('flt')), ...fault, seen: 0 }),
        ),
      );
    }),
  );
  router.post(
    '/control/event-faults',
    taking(commands.eventFaultCommand, ({ times, ...fault }, _request, response) => {
      response.json(
        store.transact(() =>
          store.put('eventFaults', { ...stamp(service, newId('flt')), ...fault, timesLeft: times }),
        ),
      );
    }),
  );
  router.delete('/control/faults', (_request, response) => {
    store.transact(() => {
      for (const kind of ['requestFaults', 'eventFaults'] as const) {
        for (const { id } of store.all(kind)) store.remove(kind, id);
      }
    });
    response.json({});
  });
  router.post(
    '/control/deliveries/release',
    taking(commands.releaseCommand, ({ eventType }, _request, response) => {
      response.json({ released: releaseByType(service, eventType) });
    }),
  );
  router.post('/control/deliveries/retry', (_request, response) => {
    response.json({ retried: retryNow(service) });
  });
}

/** @throws ApiError 400 naming what is wrong with the command */
function taking<S extends z.ZodType>(
  schema: S,
  handle: (command: z.output<S>, request: Request, response: Response) => Promise<void> | void,
): Handler {
  return (request, response) => {
    const command = schema.safeParse(request.body ?? {});
    if (!command.success) {
      const message = command.error.issues
        .map(({ path, message }) => `${path.join('.')}: ${message}`)
        .join('; ');
      throw new ApiError(400, { type: 'invalid_request_error', message });
    }
    return handle(command.data, request, response);
  };
}

function idOf(request: Request): string {
  return String(request.params.id);
}

function found<K extends PublicKind>(service: Service, kind: K, id: string): Collections[K] {
  const record = service.store.find(kind, id);
  if (record === undefined) throw noSuch(kind, id);
  return record;
}

/** A payment may be named by its charge, its intent or its session. */
function chargeOf(service: Service, id: string): ChargeRecord {
  const { store } = service;
  const intentId = store.find('sessions', id)?.paymentIntent ?? id;
  return found(service, 'charges', store.find('intents', intentId)?.latestCharge ?? id);
}

function makeAvailable(service: Service): void {
  const now = service.clock.nowSeconds();
  for (const row of service.store.all('balanceTransactions')) {
    if (row.availableOn > now) service.store.put('balanceTransactions', { ...row, availableOn: now });
  }
}
