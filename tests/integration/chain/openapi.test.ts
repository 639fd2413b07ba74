import { randomUUID } from 'node:crypto';
import { Validator } from '@seriousme/openapi-schema-validator';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { type ChainHouse, issueQuoteByHttp, makeChainHouse } from '#tests/factories/chain';
import { Agent } from '#tests/support/agent';
import { TEST_PASSWORD, type TestApp, testApp } from '#tests/support/test-app';
import { type TestStripe, testStripe } from '#tests/support/test-stripe';

let stripe: TestStripe;
let app: TestApp;
let house: ChainHouse;
let document: Record<string, never> & { paths: Record<string, Record<string, { operationId: string }>> };

beforeAll(async () => {
  stripe = await testStripe();
  app = await testApp({ stripeUrl: stripe.apiUrl });
  await stripe.control.setWebhook({
    url: `${app.baseUrl}/webhooks/stripe`,
    secret: 'whsec_tenderlight_local',
  });
  house = await makeChainHouse(app);
  document = (await new Agent(app.baseUrl).send('GET', '/api/openapi.json')).body as typeof document;
});
afterAll(async () => {
  await app.stop();
  await stripe.stop();
});

/** A caller that knows the document alone: it finds an operation by its id and fills in the path. */
class Caller {
  readonly agent = new Agent(app.baseUrl);

  async do(
    operationId: string,
    input: { path?: Record<string, unknown>; query?: Record<string, string>; body?: unknown } = {},
  ): Promise<never> {
    const [path, method] = this.find(operationId);
    const filled = path.replace(/\{(\w+)\}/g, (_all, name: string) => String(input.path?.[name]));
    const query = input.query ? `?${new URLSearchParams(input.query).toString()}` : '';
    const answer = await this.agent.send(method.toUpperCase(), filled + query, input.body);
    if (answer.status >= 300)
      throw new Error(`${operationId}: ${answer.status} ${JSON.stringify(answer.body)}`);
    return answer.body as never;
  }

  async signIn(email: string): Promise<this> {
    const { csrfToken } = (await this.do('signIn', { body: { email, password: TEST_PASSWORD } })) as {
      csrfToken: string;
    };
    this.agent.csrfToken = csrfToken;
    return this;
  }

  private find(operationId: string): [string, string] {
    for (const [path, operations] of Object.entries(document.paths)) {
      for (const [method, operation] of Object.entries(operations))
        if (operation.operationId === operationId) return [path, method];
    }
    throw new Error(`The document knows no ${operationId}`);
  }
}

describe('the served interface', () => {
  test('its description · is valid OpenAPI 3.1 (JSON Schema of the OpenAPI Initiative, by @seriousme/openapi-schema-validator)', async () => {
    const validator = new Validator();
    const result = await validator.validate(structuredClone(document));
    expect(result.errors ?? []).toEqual([]);
    expect(validator.version).toBe('3.1');
  });

  test('the chain · by the document and the sign-ins alone', async () => {
    // The link's secret is in the patient's mail; everything else comes from the document.
    const { token, quoteId } = await issueQuoteByHttp(app, house);
    const patient = new Caller();
    await patient.do('openLink', { body: { token } });
    const shown = (await patient.do('getMyQuote')) as { quoteVersionId: number; state: string };
    await patient.do('acceptMyQuote', {
      body: { quoteVersionId: shown.quoteVersionId, optionNo: 1, typedName: 'Wilma Tester', ticks: ['read'] },
    });
    const attemptKey = randomUUID();
    const checkout = (await patient.do('startMyCheckout', { body: { attemptKey, purpose: 'deposit' } })) as {
      url: string;
    };
    await stripe.control.pay(/cs_[A-Za-z0-9_]+/.exec(checkout.url)?.[0] ?? '');
    await app.settle();
    expect(((await patient.do('getMyCheckout', { path: { attemptKey } })) as { state: string }).state).toBe(
      'paid',
    );

    const counsellor = await new Caller().signIn(house.people.counsellor.email);
    expect(((await counsellor.do('getQuote', { path: { quoteId } })) as { state: string }).state).toBe(
      'accepted',
    );
    const desk = await new Caller().signIn(house.people.desk.email);
    const { accepted } = (await desk.do('getToday', { path: { siteId: house.site.siteId } })) as {
      accepted: { courseId: number }[];
    };
    const courseId = accepted[0]?.courseId;
    const course = (await desk.do('getCourse', { path: { courseId } })) as {
      leftMinor: number;
      patient: { name: string };
    };
    const receipt = (await desk.do('takePayment', {
      path: { courseId },
      body: {
        attemptKey: randomUUID(),
        payerName: course.patient.name,
        tenders: [{ tender: 'card_machine', amountMinor: course.leftMinor, reference: 'slip 9' }],
      },
    })) as { number: string; totalMinor: number };
    expect(receipt.totalMinor).toBe(course.leftMinor);
    const surgeon = await new Caller().signIn(house.people.surgeon.email);
    for (const eye of ['OD', 'OS'])
      await surgeon.do('markEyeDone', { path: { courseId, eye }, body: { doneOn: house.today } });
    const fees = (await surgeon.do('getFeeMonth', {
      path: { surgeonId: house.people.surgeon.userId },
      query: { month: house.today },
    })) as { totalMinor: number };
    expect(fees.totalMinor).toBe(80_000);
    const auditor = await new Caller().signIn(house.people.auditor.email);
    const proof = (await auditor.do('getProof')) as { tied: boolean };
    expect(proof.tied).toBe(true);
  });
});
