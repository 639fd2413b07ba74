import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { closeDay, countDay, enterTerminalBatch, getDay } from '#contract/closing';
import { getCourse } from '#contract/courses';
import { markEyeDone } from '#contract/delivery';
import { getFeeMonth } from '#contract/fees';
import { takePayment } from '#contract/payments';
import { getMyCheckout, getMyQuote } from '#contract/portal';
import { closeTill, countTill, explainTill, openTill } from '#contract/tills';
import { getToday } from '#contract/today';
import { pullPayouts } from '#server/features/bank/index';
import { computeProof } from '#server/features/proof/index';
import { systemClock } from '#server/platform/clock';
import { rawRows, readMinor } from '#server/platform/db';
import {
  acceptByLink,
  type ChainHouse,
  courseOfQuote,
  issueQuoteByHttp,
  makeChainHouse,
  openDeposit,
} from '#tests/factories/chain';
import { type TestApp, testApp } from '#tests/support/test-app';
import { type TestStripe, testStripe } from '#tests/support/test-stripe';

let stripe: TestStripe;
let app: TestApp;
let house: ChainHouse;

beforeAll(async () => {
  stripe = await testStripe();
  app = await testApp({ stripeUrl: stripe.apiUrl });
  await stripe.control.setWebhook({
    url: `${app.baseUrl}/webhooks/stripe`,
    secret: 'whsec_tenderlight_local',
  });
  house = await makeChainHouse(app);
});
afterAll(async () => {
  await app.stop();
  await stripe.stop();
});

/** Pays an open checkout as its payer would, and lets the workers act on what the processor tells. */
async function pay(attemptUrl: string | null): Promise<void> {
  const sessionId = /cs_[A-Za-z0-9_]+/.exec(attemptUrl ?? '')?.[0] ?? '';
  await stripe.control.pay(sessionId);
  await stripe.control.idle();
  await app.settle();
}

describe('the chain', () => {
  test('quote to fee statement · by HTTP · every control ties at its end', async () => {
    const quote = await issueQuoteByHttp(app, house, {
      OD: eye('-3.00', '-0.75', '10'),
      OS: eye('-2.75', '-0.50', '170'),
      surgeryOn: house.today,
    });
    const patient = await acceptByLink(app, quote);
    const checkout = await openDeposit(patient);
    expect(checkout.state).toBe('open');
    await pay(checkout.url);
    const paid = await patient.call(getMyCheckout, { params: { attemptKey: checkout.attemptKey } });
    expect(paid.state).toBe('paid');

    const desk = await app.signIn(house.people.desk.email);
    const today = await desk.call(getToday, { params: { siteId: house.site.siteId }, query: {} });
    expect(today.paidOnline.map((row) => row.receiptId)).toContain(paid.receiptId);
    const [coming] = today.surgery;
    expect(coming?.owedMinor).toBeGreaterThan(0);

    const courseId = await courseOfQuote(app, quote.quoteId);
    const till = await desk.call(openTill, {
      params: { tillId: house.site.tillId },
      body: { floatMinor: 20_000 },
    });
    const course = await desk.call(getCourse, { params: { courseId } });
    const cash = 50_000;
    const receipt = await desk.call(takePayment, {
      params: { courseId },
      body: {
        attemptKey: randomUUID(),
        payerName: 'Wilma Tester',
        tenders: [
          { tender: 'card_machine', amountMinor: course.leftMinor - 40_000, reference: 'slip 1' },
          { tender: 'cash', amountMinor: cash },
        ],
      },
    });
    expect(receipt.changeMinor).toBe(10_000);
    expect(receipt.totalMinor).toBe(course.leftMinor);

    const surgeon = await app.signIn(house.people.surgeon.email);
    for (const each of ['OD', 'OS'] as const) {
      const done = await surgeon.call(markEyeDone, {
        params: { courseId, eye: each },
        body: { doneOn: house.today },
      });
      expect(done.eyes.find((row) => row.eye === each)?.state).toBe('done');
    }
    const fees = await surgeon.call(getFeeMonth, {
      params: { surgeonId: house.people.surgeon.userId },
      query: { month: house.today },
    });
    expect(fees.totalMinor).toBe(80_000);
    expect(fees.rows.every((row) => row.why.steps.length > 1)).toBe(true);

    const desk2 = await app.signIn(house.people.desk2.email);
    await desk.call(countTill, {
      params: { tillSessionId: till.tillSessionId },
      body: { count: { '10000': 5, '5000': 1, '2000': 2, '1000': 0, '500': 1, '200': 2, '100': 1 } },
    });
    await desk.call(explainTill, {
      params: { tillSessionId: till.tillSessionId },
      body: { reason: 'a note was miscounted at opening' },
    });
    const own = await desk.tryCall(closeTill, {
      params: { tillSessionId: till.tillSessionId },
      body: { nextFloatMinor: 20_000 },
    });
    expect([own.status, own.body.reason]).toEqual([422, 'same_person']);
    const closed = await desk2.call(closeTill, {
      params: { tillSessionId: till.tillSessionId },
      body: { nextFloatMinor: 20_000 },
    });
    expect(closed.state).toBe('closed');

    const day = { siteId: house.site.siteId, day: house.today };
    const early = await desk.tryCall(countDay, { params: day });
    expect([early.status, early.body.reason]).toEqual([422, 'exceptions_left']);
    await desk.call(enterTerminalBatch, {
      params: day,
      body: { batchNo: '0318', amountMinor: course.leftMinor - 40_000, slips: 1 },
    });
    await desk.call(countDay, { params: day });
    const alone = await desk.tryCall(closeDay, { params: day });
    expect([alone.status, alone.body.reason]).toEqual([422, 'same_person']);
    const end = await desk2.call(closeDay, { params: day });
    expect([end.state, end.closes.length]).toEqual(['closed', 1]);
    expect((await desk.call(getDay, { params: day })).togetherMinor).toBe(quote.totalMinor);

    await stripe.control.advanceClock(4 * 24 * 3_600_000);
    expect(await pullPayouts(app.deps)).toBe(1);
    await stripe.control.resetClock();
    await app.settle();
    const proof = await computeProof({ db: app.deps.db, clock: systemClock }, undefined);
    expect(proof.controls.filter((control) => !control.tied)).toEqual([]);
    const balance = await app.deps.gateways.stripe.balance(course.currency);
    const [clearing] = await rawRows<{ total: unknown }>(
      app.deps.db,
      "SELECT SUM(amount_minor) AS total FROM journal_lines WHERE account_code = '1100'",
    );
    expect(readMinor(clearing?.total)).toBe(balance);
  });

  test('a second click, a second browser and a replayed event · change nothing', async () => {
    const quote = await issueQuoteByHttp(app, house);
    const patient = await acceptByLink(app, quote);
    const first = await openDeposit(patient);
    const again = await openDeposit(patient, first.attemptKey);
    const elsewhere = await openDeposit(patient);
    expect([again.url, elsewhere.url]).toEqual([first.url, first.url]);
    await pay(first.url);
    await stripe.control.retryDeliveries();
    await app.settle();
    await app.deps.db('stripe_events').update({ state: 'waiting' });
    await app.settle();
    const courseId = await courseOfQuote(app, quote.quoteId);
    const receipts = await rawRows<{ n: number }>(
      app.deps.db,
      'SELECT COUNT(*) AS n FROM receipts WHERE course_id = ?',
      [courseId],
    );
    expect(receipts[0]?.n).toBe(1);
    const shown = await patient.call(getMyQuote, {});
    expect(shown.course?.dueNowMinor).toBe(0);
  });

  test('the other notation · gives the same quote (invariant 14)', async () => {
    const minus = await issueQuoteByHttp(app, house, {
      OD: eye('-2.00', '-1.50', '75'),
      OS: eye('-2.75', '-0.50', '110'),
    });
    const plus = await issueQuoteByHttp(app, house, {
      OD: eye('-3.50', '+1.50', '165'),
      OS: eye('-3.25', '+0.50', '20'),
    });
    expect(plus.totalMinor).toBe(minus.totalMinor);
  });
});

function eye(sphere: string, cylinder: string, axis: string) {
  return { sphere, cylinder, axis };
}
