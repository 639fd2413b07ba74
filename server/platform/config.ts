import { z } from 'zod';

/** Keys and passwords that only make sense beside the local stand-ins; production refuses them. */
export const STAND_IN_STRIPE_KEY = 'sk_test_tenderlight_local';
export const STAND_IN_WEBHOOK_SECRET = 'whsec_tenderlight_local';
export const DEMO_PASSWORD = 'lantern-quay-demo';

const port = z.coerce.number().int().min(0).max(65_535);
const optionalText = z.string().min(1).optional();

const environment = z.object({
  NODE_ENV: z.enum(['development', 'test', 'production']).default('development'),
  TENDERLIGHT_MODE: z.enum(['demo', 'production']).default('demo'),
  HOST: z.string().min(1).default('127.0.0.1'),
  PORT: port.default(5180),
  PUBLIC_URL: z.url().optional(),
  DATABASE_URL: z.url({ protocol: /^mysql$/ }),
  SESSION_SECRET: z.string().min(32, 'needs at least 32 characters'),
  STRIPE_SECRET_KEY: z.string().min(8),
  STRIPE_WEBHOOK_SECRET: z.string().min(8),
  STRIPE_API_HOST: optionalText,
  STRIPE_API_PORT: port.optional(),
  STRIPE_API_PROTOCOL: z.enum(['http', 'https']).default('https'),
  SMTP_URL: z.url({ protocol: /^smtps?$/ }),
  MAIL_FROM: z.string().min(3).default('desk@lanternquay.example'),
  UPLOADS_DIR: z.string().min(1).default('.data/uploads'),
  LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
  TRUST_PROXY: z.coerce.number().int().min(0).max(8).default(0),
  DEMO_PASSWORD: optionalText,
});

/** What the process was told about its surroundings, checked once at start. */
export interface Config {
  readonly mode: 'demo' | 'production';
  readonly test: boolean;
  readonly host: string;
  readonly port: number;
  /** Origin under which people reach the application, without a trailing slash. */
  readonly publicUrl: string;
  readonly databaseUrl: string;
  readonly sessionSecret: string;
  /** True when the address people use is https: cookies are then Secure. */
  readonly secure: boolean;
  readonly stripe: {
    readonly secretKey: string;
    /** One or two: the second while a secret is being changed. */
    readonly webhookSecrets: readonly string[];
    readonly host: string | undefined;
    readonly port: number | undefined;
    readonly protocol: 'http' | 'https';
  };
  readonly smtpUrl: string;
  readonly mailFrom: string;
  readonly uploadsDir: string;
  readonly logLevel: string;
  /** Number of proxies in front whose X-Forwarded-For is believed; 0 believes none. */
  readonly trustProxy: number;
  /** Shown on the sign-in page in demo mode only. */
  readonly demoPassword: string | undefined;
}

/** The configuration is wrong; the message lists every variable and what it needs. */
export class ConfigError extends Error {}

/** Reads and checks the environment. Throws ConfigError naming each variable that is wrong. */
export function readConfig(env: Readonly<Record<string, string | undefined>>): Config {
  const filled = Object.fromEntries(Object.entries(env).filter(([, value]) => value !== ''));
  const parsed = environment.safeParse(filled);
  if (!parsed.success) {
    const lines = parsed.error.issues.map((issue) => `  ${issue.path.join('.')}: ${issue.message}`);
    throw new ConfigError(`The configuration cannot be used:\n${lines.join('\n')}`);
  }
  const e = parsed.data;
  const publicUrl = (e.PUBLIC_URL ?? `http://${e.HOST}:${e.PORT}`).replace(/\/$/, '');
  const config: Config = {
    mode: e.TENDERLIGHT_MODE,
    test: e.NODE_ENV === 'test',
    host: e.HOST,
    port: e.PORT,
    publicUrl,
    databaseUrl: e.DATABASE_URL,
    sessionSecret: e.SESSION_SECRET,
    secure: publicUrl.startsWith('https:'),
    stripe: {
      secretKey: e.STRIPE_SECRET_KEY,
      webhookSecrets: e.STRIPE_WEBHOOK_SECRET.split(',').map((secret) => secret.trim()),
      host: e.STRIPE_API_HOST,
      port: e.STRIPE_API_PORT,
      protocol: e.STRIPE_API_PROTOCOL,
    },
    smtpUrl: e.SMTP_URL,
    mailFrom: e.MAIL_FROM,
    uploadsDir: e.UPLOADS_DIR,
    logLevel: e.LOG_LEVEL,
    trustProxy: e.TRUST_PROXY,
    demoPassword: e.TENDERLIGHT_MODE === 'demo' ? (e.DEMO_PASSWORD ?? DEMO_PASSWORD) : undefined,
  };
  if (config.mode === 'production') refuseStandIns(config);
  return config;
}

/** Production takes no stand-in keys, no plain-http address and no redirected payment service. */
function refuseStandIns(config: Config): void {
  const wrong: string[] = [];
  if (config.stripe.secretKey === STAND_IN_STRIPE_KEY)
    wrong.push('STRIPE_SECRET_KEY: this is the key of the local stand-in');
  if (config.stripe.webhookSecrets.includes(STAND_IN_WEBHOOK_SECRET)) {
    wrong.push('STRIPE_WEBHOOK_SECRET: this is the secret of the local stand-in');
  }
  if (config.stripe.protocol !== 'https') wrong.push('STRIPE_API_PROTOCOL: must be https');
  if (!config.secure) wrong.push('PUBLIC_URL: must be an https address');
  if (wrong.length > 0) {
    throw new ConfigError(`Production mode refuses:\n${wrong.map((line) => `  ${line}`).join('\n')}`);
  }
}
