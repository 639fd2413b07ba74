import { describe, expect, test } from 'vitest';
import { portFrom } from '#stand-ins/supervisor/ports';
import { checkServerSettings, readSettings } from '#stand-ins/supervisor/settings';

const SESSION_SECRET = 'a secret of tests, long enough to pass';
const LIVE = {
  SESSION_SECRET,
  TENDERLIGHT_MODE: 'production',
  PUBLIC_URL: 'https://desk.lanternquay.example',
  STRIPE_SECRET_KEY: 'sk_live_of_the_clinic',
  STRIPE_WEBHOOK_SECRET: 'whsec_of_the_clinic',
  SMTP_URL: 'smtps://mail.lanternquay.example',
};

describe('what a start is told', () => {
  test('nothing · brings up a demonstration with a private database and both stand-ins', () => {
    const settings = readSettings({ SESSION_SECRET });
    expect(settings).toMatchObject({
      demo: true,
      address: 'http://127.0.0.1:5180',
      suppliedDatabase: undefined,
      stripeStandIn: true,
      mailbox: true,
    });
    expect(settings.wanted.map((each) => each.port)).toEqual([5180, 5181, 5182, 5183, 5184]);
    expect(() => checkServerSettings(settings, {})).not.toThrow();
  });
  test('production with services of its own · starts no stand-in and tells no demo password', () => {
    const settings = readSettings(LIVE);
    expect([settings.demo, settings.stripeStandIn, settings.mailbox]).toEqual([false, false, false]);
    expect(settings.wanted.map((each) => each.variable)).toEqual(['PORT']);
    expect(settings.server).not.toHaveProperty('DEMO_PASSWORD');
    expect(() => checkServerSettings(settings, LIVE)).not.toThrow();
  });
  test.each([
    ['without a payment key', { STRIPE_SECRET_KEY: '' }, 'STRIPE_SECRET_KEY'],
    ['with the stand-in’s key', { STRIPE_SECRET_KEY: 'sk_test_tenderlight_local' }, 'STRIPE_SECRET_KEY'],
    ['without a mail server', { SMTP_URL: '' }, 'SMTP_URL'],
    ['under plain http', { PUBLIC_URL: 'http://desk.lanternquay.example' }, 'PUBLIC_URL'],
    ['with a short session secret', { SESSION_SECRET: 'short' }, 'SESSION_SECRET'],
  ])('production %s · is refused by the variable’s name', (_name, change, variable) => {
    const env = { ...LIVE, ...change };
    expect(() => checkServerSettings(readSettings(env), env)).toThrow(variable);
  });
  test('two database addresses · are used; one alone is refused', () => {
    const both = { DATABASE_URL: 'mysql://a:b@db/x', DATABASE_OWNER_URL: 'mysql://o:b@db/x' };
    expect(readSettings({ SESSION_SECRET, ...both }).suppliedDatabase).toEqual({
      app: both.DATABASE_URL,
      owner: both.DATABASE_OWNER_URL,
    });
    for (const [name, url] of Object.entries(both))
      expect(() => readSettings({ SESSION_SECRET, [name]: url })).toThrow('needs both');
  });
  test('listening on every interface · is asked about on loopback', () => {
    expect(readSettings({ SESSION_SECRET, HOST: '0.0.0.0', PORT: '80' }).readyUrl).toBe(
      'http://127.0.0.1:80/api/ready',
    );
  });
  test.each(['0', '65536', '80a', '-1', '1e3', '5180.5'])('the port %s · is refused', (port) => {
    expect(() => portFrom({ PORT: port }, 'PORT', 5180)).toThrow(`PORT: ${port} is not a port`);
  });
});
