import { readFileSync } from 'node:fs';
import Stripe from 'stripe';
import { describe, expect, test } from 'vitest';
import { API_VERSION } from '#stand-ins/stripe-mock/serialise/event';
import { ABSENT, loadPublishedSchemas, type PublishedSchemas } from './published-schemas.ts';
import { DAY_MS, errorOf, openSession, openTestBed, payNewSession, sessionParameters } from './test-bed.ts';

/**
 * Every test of this folder checks all answers and events of its stand-in by the published schemas when it ends.
 * Here the checking itself is checked: the version, that every kind of object passes by, and that it can fail.
 */
const MANIFEST = new URL('../../../node_modules/stripe/package.json', import.meta.url);
const { version: installed } = JSON.parse(readFileSync(MANIFEST, 'utf8')) as { version: string };
const schemas = loadPublishedSchemas();
if (schemas === null) process.stdout.write(`${ABSENT}\n`);

const KINDS = [
  'balance',
  'balance_transaction',
  'charge',
  'checkout.session',
  'dispute',
  'error',
  'event',
  'item',
  'payment_intent',
  'payment_method',
  'payout',
  'price',
  'refund',
];

/** Without the schemas there is nothing to compare with; the notice says so where the run is read. */
function withSchemas(check: (schemas: PublishedSchemas) => Promise<void> | void) {
  return async ({ annotate }: { annotate: (message: string) => Promise<unknown> }) => {
    if (schemas === null) await annotate(ABSENT);
    else await check(schemas);
  };
}

describe('The published schemas', () => {
  test(
    'version · that of the installed SDK, whose API version the stand-in speaks',
    withSchemas((published) => {
      expect(published.version).toBe(installed);
      expect(published.apiVersion).toBe(API_VERSION);
    }),
  );

  test('the stand-in’s API version · the one the SDK sends', () => {
    expect(API_VERSION).toBe(Stripe.API_VERSION);
  });

  test(
    'a spoiled answer · does not pass',
    withSchemas(async (published) => {
      const bed = await openTestBed();
      const session = JSON.parse(JSON.stringify(await openSession(bed))) as Record<string, unknown>;
      await bed.close();
      expect(published.problemsOf(session)).toEqual([]);
      expect(published.problemsOf({ ...session, payment_status: 'maybe' })).not.toEqual([]);
      const { expires_at: _, ...shortened } = session;
      expect(published.problemsOf({ object: 'list', data: [shortened] })).not.toEqual([]);
    }),
  );

  test(
    'a long life of everything · each kind of object passes by and is as published',
    withSchemas(async (published) => {
      const bed = await openTestBed();
      const { stripe, control } = bed;
      const answers: unknown[] = [];
      const keep = async (answer: Promise<unknown>) => answers.push(JSON.parse(JSON.stringify(await answer)));
      const paid = await payNewSession(bed, '4242424242424242');
      for (const card of ['4000000000000259', '4000000000001976', '4000000000007726', '4000000000005126']) {
        const { charge } = await payNewSession(bed, card);
        await control.idle();
        await stripe.refunds.create({ charge: charge.id, amount: 100 }).catch(() => {});
      }
      const declined = await openSession(bed);
      await control.pay(declined.id, '4000000000000002');
      await control.pay(declined.id, '4000002760003184', { authentication: null });
      await keep(
        stripe.checkout.sessions.retrieve(declined.id, {
          expand: ['payment_intent.payment_method', 'line_items'],
        }),
      );
      await stripe.checkout.sessions.expire(declined.id);
      const error = await errorOf(
        stripe.checkout.sessions.create({ ...sessionParameters(), success_url: '' }),
      );
      answers.push({ error: { type: error.rawType, message: error.message } });
      await control.advanceClock(20 * DAY_MS);
      await keep(
        stripe.checkout.sessions.list({ expand: ['data.line_items', 'data.payment_intent.latest_charge'] }),
      );
      await keep(
        stripe.charges.retrieve(paid.charge.id, {
          expand: ['balance_transaction', 'refunds', 'payment_intent'],
        }),
      );
      await keep(stripe.balance.retrieve());
      await keep(stripe.balanceTransactions.list({ limit: 100, expand: ['data.source'] }));
      await keep(stripe.payouts.list({ expand: ['data.balance_transaction'] }));
      await keep(stripe.disputes.list({ expand: ['data.charge'] }));
      await keep(stripe.refunds.list());
      await keep(stripe.events.list({ limit: 100 }));
      await bed.close();
      expect(published.problemsOf(answers)).toEqual([]);
      expect([...published.checked.keys()].sort()).toEqual(expect.arrayContaining(KINDS));
    }),
  );
});
