import { apiRoutes } from '#stand-ins/stripe-mock/api/api-routes';
import { Queue } from '#stand-ins/stripe-mock/clock/queue';
import { runTask } from '#stand-ins/stripe-mock/clock/run-task';
import { controlRoutes } from '#stand-ins/stripe-mock/control/control-routes';
import { planDailyPayout } from '#stand-ins/stripe-mock/objects/payouts';
import { pageRoutes } from '#stand-ins/stripe-mock/page/page-routes';
import { PayerDesk } from '#stand-ins/stripe-mock/page/pay-as-payer';
import { openStoreInFolder, openStoreInMemory } from '#stand-ins/stripe-mock/state/log-file';
import { deliver } from '#stand-ins/stripe-mock/webhooks/deliver';
import { release } from '#stand-ins/stripe-mock/webhooks/deliveries';
import { close, createHttpServer, listen } from './http-server.ts';
import type { Service } from './service.ts';
import { createService } from './service.ts';

export const DEFAULT_SECRET_KEY = 'sk_test_tenderlight_local';
export { DEFAULT_WEBHOOK_SECRET } from './service.ts';

const LOOPBACK = '127.0.0.1';

export interface StripeMockOptions {
  /** Address API and hosted page listen on; loopback unless given. */
  readonly host?: string | undefined;
  /** Port of API and hosted page; 0 takes a free one. */
  readonly port?: number | undefined;
  readonly controlPort?: number | undefined;
  /** Folder that keeps the state; without one it lives in memory only. */
  readonly dataFolder?: string | undefined;
  readonly secretKey?: string | undefined;
  readonly webhookUrl?: string | undefined;
  readonly webhookSecret?: string | undefined;
  /** Lower-case ISO code of the account's currency. */
  readonly currency?: string | undefined;
}

export interface RunningStripeMock {
  readonly apiUrl: string;
  readonly controlUrl: string;
  /** Resolves when both ports are free and the state is written. */
  stop(): Promise<void>;
}

/** Starts the stand-in of the hosted payment service inside this process. */
export async function startStripeMock(options: StripeMockOptions = {}): Promise<RunningStripeMock> {
  const { store, compact } =
    options.dataFolder === undefined ? openStoreInMemory() : openStoreInFolder(options.dataFolder);
  const service = createService(store, {
    secretKey: options.secretKey ?? DEFAULT_SECRET_KEY,
    currency: options.currency ?? 'eur',
    webhookUrl: options.webhookUrl ?? null,
    webhookSecret: options.webhookSecret ?? null,
  });
  const queue = new Queue(service, {
    settle: (task) => runTask(service, task),
    deliver: (task, stopping) => deliver(service, task, stopping),
  });
  const desk = new PayerDesk(service, () => queue.idle());
  const api = createHttpServer([
    { path: '/v1', router: apiRoutes(service) },
    { path: '/', router: pageRoutes(service, desk) },
  ]);
  const control = createHttpServer([{ path: '/', router: controlRoutes({ service, queue, desk }) }]);
  service.apiUrl = await listen(api, options.host ?? LOOPBACK, options.port ?? 0);
  // Whoever reaches the control port moves the money: it is never offered beyond this machine.
  const controlUrl = await listen(control, LOOPBACK, options.controlPort ?? 0).catch(
    async (error: unknown) => {
      await close(api);
      throw error;
    },
  );
  resume(service);
  queue.start();
  return {
    apiUrl: service.apiUrl,
    controlUrl,
    stop: async () => {
      await Promise.all([close(api), close(control), queue.stop()]);
      compact();
    },
  };
}

/** Takes up what an earlier run left; a first run gets its first daily payout. */
function resume(service: Service): void {
  release(service, ({ hold }) => hold === 'until_redirected');
  service.store.transact(() => {
    if (!service.store.all('tasks').some(({ kind }) => kind === 'daily_payout')) planDailyPayout(service);
  });
}
