import { randomUUID } from 'node:crypto';
import { Validator } from '@seriousme/openapi-schema-validator';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { addDays, clinicDate, instantAt } from '#domain/time/index';
import { ZONE } from '#seeds/clinic';
import { seedDemo } from '#seeds/demo';
import { type SteppedClock, steppedClock } from '#server/platform/clock';
import { DEMO_PASSWORD } from '#server/platform/config';
import { sqlInstant } from '#server/platform/db';
import type { Mailbox } from '#stand-ins/mailbox/start-mailbox';
import { Agent } from '#tests/support/agent';
import {
  type DocumentCaller,
  DocumentedInterface,
  type OpenApiDocument,
} from '#tests/support/document-caller';
import { type TestApp, testApp } from '#tests/support/test-app';
import { freshDatabase } from '#tests/support/test-database';
import { testMailbox } from '#tests/support/test-mailbox';
import { type TestStripe, testStripe } from '#tests/support/test-stripe';

/** A Thursday: the demonstration's anchor, whatever day the test runs on. */
const TODAY = clinicDate('2026-03-12');

let stripe: TestStripe;
let mailbox: Mailbox;
let app: TestApp;
let document: OpenApiDocument;
let documented: DocumentedInterface;
const clock: SteppedClock = steppedClock(instantAt(TODAY, '10:00', ZONE));

/** Both clocks, ours and the processor's, stand at this moment of a day. */
async function standAt(day: typeof TODAY, time: string): Promise<void> {
  clock.set(instantAt(day, time, ZONE));
  await stripe.control.setClock(instantAt(day, time, ZONE), { frozen: true });
}

beforeAll(async () => {
  stripe = await testStripe();
  mailbox = await testMailbox();
  app = await testApp({
    database: await freshDatabase('openapi'),
    stripeUrl: stripe.apiUrl,
    smtpUrl: mailbox.smtpUrl,
    clock,
  });
  const processor = {
    setClock: async (at: string) => {
      await stripe.control.setClock(at, { frozen: true });
    },
    pay: async (sessionId: string) => {
      await stripe.control.pay(sessionId);
    },
  };
  const now = clock.now();
  await seedDemo({ ...app.deps, clock }, processor, { anchor: TODAY, now, password: DEMO_PASSWORD });
  await standAt(TODAY, '10:00');
  await stripe.control.setWebhook({
    url: `${app.baseUrl}/webhooks/stripe`,
    secret: 'whsec_tenderlight_local',
  });
  // The demonstration's own mails are another test's matter; printing all their papers takes a while.
  await app.deps.db('outbox_mails').update({ state: 'sent', sent_at: sqlInstant(now) });
  document = (await new Agent(app.baseUrl).send('GET', '/api/openapi.json')).body as OpenApiDocument;
  documented = new DocumentedInterface(app.baseUrl, document);
}, 240_000);
afterAll(async () => {
  await app.stop();
  await mailbox.stop();
  await stripe.stop();
});

describe('the served interface', () => {
  test('its description · is valid OpenAPI 3.1 (JSON Schema of the OpenAPI Initiative, by @seriousme/openapi-schema-validator)', async () => {
    const validator = new Validator();
    const result = await validator.validate(structuredClone(document) as never);
    expect(result.errors ?? []).toEqual([]);
    expect(validator.version).toBe('3.1');
  });

  test('the chain · by the document and the demonstration’s sign-ins alone', async () => {
    const counsellor = await signIn('counsellor');
    const desk = await signIn('desk');
    const desk2 = await signIn('desk2');
    const surgeon = await signIn('surgeon');
    const { sites } = await counsellor.do<Session>('getSession');
    const siteId = sites.find((site) => site.code === 'LQ')?.siteId ?? 0;
    const day = { siteId, day: TODAY };

    // Quote, mail, acceptance, deposit.
    const email = 'una.hartwell@patients.example';
    const quoteId = await sendQuote(counsellor, surgeon, siteId, email);
    const patient = documented.caller();
    const attemptKey = await acceptAndPay(patient, email);
    expect(await patient.do('getMyCheckout', { path: { attemptKey } })).toMatchObject({ state: 'paid' });
    expect(await attachedTo(email, /^Receipt/)).toEqual(['application/pdf']);
    expect(await counsellor.do('getQuote', { path: { quoteId } })).toMatchObject({ state: 'accepted' });

    // The desk takes the balance over two tenders, with change.
    const today = await desk.do<Today>('getToday', { path: { siteId } });
    const courseId = today.surgery.find((row) => row.patientName.includes('Hartwell'))?.courseId ?? 0;
    expect(today.paidOnline.map((row) => row.courseId)).toContain(courseId);
    const { leftMinor } = await desk.do<Course>('getCourse', { path: { courseId } });
    const receipt = await desk.do('takePayment', {
      path: { courseId },
      body: {
        attemptKey: randomUUID(),
        payerName: 'Una Hartwell',
        tenders: [
          { tender: 'card_machine', amountMinor: leftMinor - 30_000, reference: 'slip 9' },
          { tender: 'cash', amountMinor: 35_000 },
        ],
      },
    });
    expect(receipt).toMatchObject({ totalMinor: leftMinor, changeMinor: 5_000 });

    // Both eyes done; the fee with its reasons.
    for (const eye of ['OD', 'OS'])
      await surgeon.do('markEyeDone', { path: { courseId, eye }, body: { doneOn: TODAY } });
    const { person } = await surgeon.do<Session>('getSession');
    const fees = await surgeon.do<Fees>('getFeeMonth', {
      path: { surgeonId: person.userId },
      query: { month: TODAY },
    });
    const earned = fees.rows.filter((row) => row.courseId === courseId);
    expect(earned.map((row) => [row.eye, row.amountMinor]).sort()).toEqual([
      ['OD', 40_000],
      ['OS', 40_000],
    ]);
    expect(earned.every((row) => row.why.steps.length > 1)).toBe(true);

    // Tills and day, by two people.
    await closeTills(desk, desk2, siteId, 30_000);
    await desk.do('enterTerminalBatch', {
      path: day,
      body: { batchNo: '0312', amountMinor: leftMinor - 30_000, slips: 1 },
    });
    await desk.do('countDay', { path: day });
    expect(await desk2.do('closeDay', { path: day })).toMatchObject({ state: 'closed', differenceMinor: 0 });

    // Days later the processor has paid out; everything ties.
    await standAt(addDays(TODAY, 5), '11:00');
    const later = await signIn('desk');
    await later.do('pullPayouts');
    await app.settle();
    const bank = await later.do<Bank>('listPayouts');
    expect(bank.payouts.filter((payout) => !payout.tied)).toEqual([]);
    expect(bank.waiting).toEqual([]);
    expect(bank.onlineClearingMinor).toBe(await app.deps.gateways.stripe.balance('EUR' as never));
    const auditor = await signIn('auditor');
    const proof = await auditor.do<Proof>('getProof');
    expect(proof.controls.filter((control) => !control.tied)).toEqual([]);
    const balance = await auditor.do<Balance>('getTrialBalance');
    expect(balance.debitMinor).toBe(balance.creditMinor);
    expect(await receiptNumbers(auditor, siteId)).toEqual(
      expect.arrayContaining([expect.stringMatching(/^LQ-26-/)]),
    );
  });
});

async function signIn(name: string): Promise<DocumentCaller> {
  return await documented.caller().signIn(`${name}@tenderlight.example`, DEMO_PASSWORD);
}

/** Patient, eyes, the surgeon's plan, both eyes by LASIK today, and the quote on its way by mail. */
async function sendQuote(
  counsellor: DocumentCaller,
  surgeon: DocumentCaller,
  siteId: number,
  email: string,
): Promise<number> {
  const { patientId } = await counsellor.do<{ patientId: number }>('createPatient', {
    body: { siteId, givenName: 'Una', familyName: 'Hartwell', bornOn: '1991-08-20', email, phone: null },
  });
  const path = { patientId };
  await counsellor.do('recordPrescription', {
    path,
    body: {
      refractedOn: TODAY,
      OD: { sphere: '-3.00', cylinder: '-0.75', axis: '10' },
      OS: { sphere: '-2.75', cylinder: '-0.50', axis: '170' },
    },
  });
  await surgeon.do('approvePlan', { path, body: { OD: ['lasik'], OS: ['lasik'] } });
  const { quoteId, draft, draftVersion } = await counsellor.do<Quote>('createQuote', { body: { patientId } });
  const surgery = { plan: 'same_session', on: TODAY };
  const saved = await counsellor.do<{ draftVersion: number; prices: Price[] }>('saveDraft', {
    path: { quoteId },
    body: {
      draft: { ...draft, options: draft.options.map((option) => ({ ...option, surgery })) },
      draftVersion,
    },
  });
  const options = saved.prices.map(({ totalMinor, contentHash }) => ({ totalMinor, contentHash }));
  await counsellor.do('issueQuote', {
    path: { quoteId },
    body: { draftVersion: saved.draftVersion, options },
  });
  await app.settle();
  return quoteId;
}

/** The patient follows the mailed link, accepts, and pays the deposit; answers the attempt's key. */
async function acceptAndPay(patient: DocumentCaller, email: string): Promise<string> {
  const [mail] = (await mailbox.mails()).filter(({ to }) => to === email);
  expect(mail?.attachments.map((file) => file.contentType)).toEqual(['application/pdf']);
  const token = /\/q\/([\w-]+)/.exec(mail?.text ?? '')?.[1] ?? '';
  await patient.do('openLink', { body: { token } });
  const shown = await patient.do<{ quoteVersionId: number }>('getMyQuote');
  await patient.do('acceptMyQuote', {
    body: {
      quoteVersionId: shown.quoteVersionId,
      optionNo: 1,
      typedName: 'Una Hartwell',
      ticks: ['I have read it'],
    },
  });
  const attemptKey = randomUUID();
  const { url } = await patient.do<{ url: string }>('startMyCheckout', {
    body: { attemptKey, purpose: 'deposit' },
  });
  await stripe.control.pay(/cs_[A-Za-z0-9_]+/.exec(url)?.[0] ?? '');
  await stripe.control.idle();
  await app.settle();
  return attemptKey;
}

async function attachedTo(email: string, subject: RegExp): Promise<string[]> {
  const mail = (await mailbox.mails()).find((each) => each.to === email && subject.test(each.subject));
  return (mail?.attachments ?? []).map((file) => file.contentType);
}

/** Counts every open till blind and has the second person close it; one holds what was taken besides its float. */
async function closeTills(
  desk: DocumentCaller,
  desk2: DocumentCaller,
  siteId: number,
  takenMinor: number,
): Promise<void> {
  const { tills, denominations } = await desk.do<Tills>('listTills', { path: { siteId } });
  const open = tills.flatMap((till) => till.sessions).filter((session) => session.state === 'open');
  expect(open.length).toBe(1);
  for (const { tillSessionId, floatMinor } of open) {
    let left = floatMinor + takenMinor;
    const count: Record<string, number> = {};
    for (const { valueMinor } of denominations.toSorted((a, b) => b.valueMinor - a.valueMinor)) {
      count[valueMinor] = Math.floor(left / valueMinor);
      left %= valueMinor;
    }
    const path = { tillSessionId };
    expect(await desk.do('countTill', { path, body: { count } })).toMatchObject({ differenceMinor: 0 });
    await desk2.do('closeTill', { path, body: { nextFloatMinor: floatMinor } });
  }
}

/** Receipt numbers of the site since it opened, in order; throws where one is missing or told twice. */
async function receiptNumbers(auditor: DocumentCaller, siteId: number): Promise<string[]> {
  const numbers: string[] = [];
  for (let day = addDays(TODAY, -30); day <= TODAY; day = addDays(day, 1)) {
    const { receipts } = await auditor.do<{ receipts: { number: string }[] }>('listReceipts', {
      path: { siteId },
      query: { day },
    });
    numbers.push(...receipts.map((receipt) => receipt.number));
  }
  numbers.sort();
  const running = numbers.map((number) => Number(number.split('-').at(-1)));
  expect(running).toEqual(numbers.map((_number, at) => at + 1));
  return numbers;
}

interface Session {
  readonly person: { readonly userId: number };
  readonly sites: readonly { readonly siteId: number; readonly code: string }[];
}
interface Quote {
  readonly quoteId: number;
  readonly draft: { readonly options: readonly object[] };
  readonly draftVersion: number;
}
interface Price {
  readonly totalMinor: number;
  readonly contentHash: string;
}
interface Today {
  readonly surgery: readonly { readonly courseId: number; readonly patientName: string }[];
  readonly paidOnline: readonly { readonly courseId: number }[];
}
interface Course {
  readonly leftMinor: number;
}
interface Fees {
  readonly rows: readonly {
    readonly courseId: number;
    readonly eye: string;
    readonly amountMinor: number;
    readonly why: { readonly steps: readonly unknown[] };
  }[];
}
interface Tills {
  readonly denominations: readonly { readonly valueMinor: number }[];
  readonly tills: readonly {
    readonly sessions: readonly {
      readonly tillSessionId: number;
      readonly state: string;
      readonly floatMinor: number;
    }[];
  }[];
}
interface Bank {
  readonly payouts: readonly { readonly tied: boolean }[];
  readonly waiting: readonly unknown[];
  readonly onlineClearingMinor: number;
}
interface Proof {
  readonly controls: readonly { readonly tied: boolean }[];
}
interface Balance {
  readonly debitMinor: number;
  readonly creditMinor: number;
}
