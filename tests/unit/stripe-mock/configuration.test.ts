import { describe, expect, test } from 'vitest';
import { readConfiguration } from '#stand-ins/stripe-mock/configuration';

describe('readConfiguration', () => {
  test('environment · every setting by its name', () => {
    const environment = {
      STRIPE_MOCK_HOST: '127.0.0.1',
      STRIPE_MOCK_PORT: '0',
      STRIPE_MOCK_CONTROL_PORT: '4101',
      STRIPE_MOCK_DATA: '/tmp/somewhere',
      STRIPE_MOCK_SECRET_KEY: 'sk_test_x',
      STRIPE_MOCK_WEBHOOK_URL: 'http://127.0.0.1:1/webhook',
      STRIPE_MOCK_WEBHOOK_SECRET: 'whsec_x',
      STRIPE_MOCK_CURRENCY: 'GBP',
    };
    expect(readConfiguration([], environment)).toEqual({
      host: '127.0.0.1',
      port: 0,
      controlPort: 4_101,
      dataFolder: '/tmp/somewhere',
      secretKey: 'sk_test_x',
      webhookUrl: 'http://127.0.0.1:1/webhook',
      webhookSecret: 'whsec_x',
      currency: 'gbp',
    });
  });

  test('a flag · wins over the environment; an empty setting · is none', () => {
    const read = readConfiguration(['--port', '4100'], { STRIPE_MOCK_PORT: '1', STRIPE_MOCK_DATA: '' });
    expect([read.port, read.dataFolder]).toEqual([4_100, undefined]);
  });

  test.each([
    ['STRIPE_MOCK_PORT', 'eighty'],
    ['STRIPE_MOCK_CONTROL_PORT', '70000'],
    ['STRIPE_MOCK_WEBHOOK_URL', 'nowhere'],
    ['STRIPE_MOCK_CURRENCY', 'xqq'],
  ])('%s=%s · refused by name', (name, value) => {
    expect(() => readConfiguration([], { [name]: value })).toThrow(name);
  });
});
