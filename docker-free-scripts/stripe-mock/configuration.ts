import { parseArgs } from 'node:util';
import { isKnownCurrency } from '#stand-ins/stripe-mock/objects/currencies';
import type { StripeMockOptions } from './start-stripe-mock.ts';

/** Each setting by its flag; the environment's name is the flag's in capitals behind `STRIPE_MOCK_`. */
const FLAGS = [
  'host',
  'port',
  'control-port',
  'data',
  'secret-key',
  'webhook-url',
  'webhook-secret',
  'currency',
] as const;

type Flag = (typeof FLAGS)[number];

/**
 * Settings from flags and environment; a flag wins.
 *
 * @throws Error naming the setting that cannot be used
 */
export function readConfiguration(
  argv: readonly string[],
  environment: NodeJS.ProcessEnv,
): StripeMockOptions {
  const { values } = parseArgs({
    args: [...argv],
    options: Object.fromEntries(FLAGS.map((flag) => [flag, { type: 'string' as const }])),
  });
  const read = (flag: Flag): string | undefined => {
    const value = values[flag] ?? environment[nameOf(flag)];
    return typeof value === 'string' && value !== '' ? value : undefined;
  };
  const currency = read('currency')?.toLowerCase();
  const webhookUrl = read('webhook-url');
  if (currency !== undefined && !isKnownCurrency(currency))
    throw new Error(`${nameOf('currency')}: no such currency`);
  if (webhookUrl !== undefined && !URL.canParse(webhookUrl))
    throw new Error(`${nameOf('webhook-url')}: not an address`);
  return {
    host: read('host'),
    port: portOf('port', read('port')),
    controlPort: portOf('control-port', read('control-port')),
    dataFolder: read('data'),
    secretKey: read('secret-key'),
    webhookUrl,
    webhookSecret: read('webhook-secret'),
    currency,
  };
}

function nameOf(flag: Flag): string {
  return `STRIPE_MOCK_${flag.toUpperCase().replaceAll('-', '_')}`;
}

function portOf(flag: Flag, text: string | undefined): number | undefined {
  if (text === undefined) return undefined;
  const port = Number(text);
  if (!/^\d+$/.test(text) || port > 65_535) throw new Error(`${nameOf(flag)}: not a port`);
  return port;
}
