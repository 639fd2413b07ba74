import { Clock } from '#stand-ins/stripe-mock/clock/clock';
import type { SettingsRecord, Stored } from '#stand-ins/stripe-mock/state/records';
import type { Store } from '#stand-ins/stripe-mock/state/store';

/** What every part of the stand-in works with; made once at start. */
export interface Service {
  readonly store: Store;
  readonly clock: Clock;
  readonly secretKey: string;
  readonly currency: string;
  /** Address of API and hosted page without a trailing slash; known once the port is. */
  apiUrl: string;
  /** The API call being answered, for the events it causes; null for the payer, the queue and the control port. */
  request: { readonly id: string; readonly idempotencyKey: string | null } | null;
  /** How many payers are about to be sent back ahead of the news; what happens meanwhile is told after them. */
  payersUnderway: number;
  /** Wakes the queue after something was put on it. */
  wake: () => void;
}

export interface ServiceOptions {
  readonly secretKey: string;
  readonly currency: string;
  /** What the start names wins over what an earlier run was told; null leaves that as it is. */
  readonly webhookUrl: string | null;
  readonly webhookSecret: string | null;
}

export const DEFAULT_WEBHOOK_SECRET = 'whsec_tenderlight_local';

const SETTINGS = 'settings';

const FIRST_SETTINGS: SettingsRecord = {
  id: SETTINGS,
  seq: 0,
  created: 0,
  webhookUrl: null,
  webhookSecret: DEFAULT_WEBHOOK_SECRET,
  signatureTime: 'clock',
  redirect: 'after_webhook',
  shortBalance: false,
  feeDelayMs: 0,
  negativePayouts: false,
};

export function createService(store: Store, options: ServiceOptions): Service {
  const service: Service = {
    store,
    clock: new Clock(store),
    secretKey: options.secretKey,
    currency: options.currency,
    apiUrl: '',
    request: null,
    payersUnderway: 0,
    wake: () => {},
  };
  const saved = store.find('settings', SETTINGS) ?? FIRST_SETTINGS;
  store.transact(() =>
    store.put('settings', {
      ...saved,
      webhookUrl: options.webhookUrl ?? saved.webhookUrl,
      webhookSecret: options.webhookSecret ?? saved.webhookSecret,
    }),
  );
  return service;
}

export function settingsOf(service: Service): SettingsRecord {
  return service.store.get('settings', SETTINGS);
}

/** The members every new record begins with. */
export function stamp(service: Service, id: string): Stored {
  return { id, seq: service.store.nextSeq(), created: service.clock.nowSeconds() };
}
