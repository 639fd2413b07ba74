import { randomUUID } from 'node:crypto';
import { approvePlan, createPatient, recordPrescription } from '#contract/patients';
import { acceptMyQuote, getMyQuote, openLink, startMyCheckout } from '#contract/portal';
import { createQuote, getQuote, issueQuote, saveDraft } from '#contract/quotes';
import { currencyCode, minor } from '#domain/money/index';
import { addDays, type ClinicDate, dayOf } from '#domain/time/index';
import { demoCostBook, demoPriceBook } from '#seeds/price-book';
import { createDraft, putInForce } from '#server/features/catalogue/index';
import { agreeSurgeonFee } from '#server/features/fees/index';
import { rawRows } from '#server/platform/db';
import type { Agent } from '#tests/support/agent';
import type { TestApp } from '#tests/support/test-app';
import { makeSite, makeUser, type TestSite, type TestUser, unique } from './house.ts';

/** Links as they went out, by quote: the secret is told to the mail alone, so the factory listens where the mail does. */
const links = new Map<number, string>();

function tokenOf(quoteId: number): string {
  const token = links.get(quoteId)?.split('/q/')[1];
  if (!token) throw new Error(`No link went out for quote ${quoteId}`);
  return token;
}

/** A site with everybody a chain needs, its own price book and a fee agreement. */
export interface ChainHouse {
  readonly site: TestSite;
  readonly today: ClinicDate;
  readonly people: Readonly<
    Record<'counsellor' | 'desk' | 'desk2' | 'surgeon' | 'manager' | 'auditor', TestUser>
  >;
}

export async function makeChainHouse(app: TestApp): Promise<ChainHouse> {
  const { deps } = app;
  deps.facts.subscribe('quote.issued', (_trx, fact) => {
    if (fact.linkUrl !== null) links.set(fact.quoteId, fact.linkUrl);
    return Promise.resolve();
  });
  const site = await makeSite(deps);
  const today = dayOf(deps.clock.now(), 'Europe/Dublin');
  const user = (...roles: Parameters<typeof makeUser>[1]) => makeUser(deps, roles, [site.siteId]);
  const people = {
    counsellor: await user('counsellor'),
    desk: await user('front_desk'),
    desk2: await user('front_desk'),
    surgeon: await user('surgeon'),
    manager: await user('manager'),
    auditor: await user('auditor'),
  };
  const bookId = await createDraft(
    deps,
    { siteId: site.siteId, file: { book: demoPriceBook, costs: demoCostBook } },
    people.manager.actor,
  );
  const [row] = await rawRows<{ content_hash: string }>(
    deps.db,
    'SELECT content_hash FROM price_books WHERE price_book_id = ?',
    [bookId],
  );
  await putInForce(
    deps,
    bookId,
    { contentHash: row?.content_hash ?? '', inForceOn: today },
    people.manager.actor,
  );
  await agreeSurgeonFee(deps, {
    surgeonUserId: people.surgeon.userId,
    effectiveOn: today,
    terms: {
      currency: currencyCode('EUR'),
      basis: {
        kind: 'per_eye',
        byProcedure: {
          lasik: minor(40_000),
          'lenticule-extraction': minor(45_000),
          'surface-ablation': minor(40_000),
        },
      },
      enhancement: null,
      trigger: 'done_and_collected',
      monthlyCapMinor: null,
      guarantee: null,
      sharedCare: null,
      withholding: [],
    },
    agreedBy: people.manager.userId,
    actor: people.manager.actor,
  });
  return { site, today, people };
}

export interface IssuedQuote {
  readonly patientId: number;
  readonly quoteId: number;
  readonly email: string;
  readonly totalMinor: number;
  /** The secret of the patient's link, as the mail holds it. */
  readonly token: string;
}

/** What is typed of one eye. */
export interface TypedEye {
  readonly sphere: string;
  readonly cylinder: string;
  readonly axis: string;
}

const OD: TypedEye = { sphere: '-3.00', cylinder: '-0.75', axis: '10' };
const OS: TypedEye = { sphere: '-2.75', cylinder: '-0.50', axis: '170' };

/** Counsellor and surgeon by HTTP: patient, refraction, plan, quote, sent by mail. Both eyes by LASIK on one day. */
export async function issueQuoteByHttp(
  app: TestApp,
  house: ChainHouse,
  typed: { OD: TypedEye; OS: TypedEye; surgeryOn?: ClinicDate } = { OD, OS },
): Promise<IssuedQuote> {
  const counsellor = await app.signIn(house.people.counsellor.email);
  const surgeon = await app.signIn(house.people.surgeon.email);
  const email = `${unique('patient')}@patients.example`;
  const { patientId } = await counsellor.call(createPatient, {
    body: {
      siteId: house.site.siteId,
      givenName: 'Wilma',
      familyName: unique('Tester'),
      bornOn: '1990-04-02',
      email,
      phone: null,
      patientClass: 'standard',
      evenSo: true,
    },
  });
  const vertex = { vertex: '' };
  await counsellor.call(recordPrescription, {
    params: { patientId },
    body: { refractedOn: house.today, OD: { ...typed.OD, ...vertex }, OS: { ...typed.OS, ...vertex } },
  });
  await surgeon.call(approvePlan, { params: { patientId }, body: { OD: ['lasik'], OS: ['lasik'] } });
  const { quoteId } = await counsellor.call(createQuote, { body: { patientId } });
  const before = await counsellor.call(getQuote, { params: { quoteId } });
  const [option] = before.draft?.options ?? [];
  if (!before.draft || !option) throw new Error('A new quote has no draft');
  const draft = {
    ...before.draft,
    options: [
      {
        ...option,
        surgery: { plan: 'same_session' as const, on: typed.surgeryOn ?? addDays(house.today, 30) },
      },
    ],
  };
  await counsellor.call(saveDraft, {
    params: { quoteId },
    body: { draft, draftVersion: before.draftVersion },
  });
  const saved = await counsellor.call(getQuote, { params: { quoteId } });
  const options = saved.prices.map((price) => {
    if (!price.ok) throw new Error(JSON.stringify(price.refusals));
    return { totalMinor: price.totalMinor, contentHash: price.contentHash };
  });
  await counsellor.call(issueQuote, {
    params: { quoteId },
    body: { draftVersion: saved.draftVersion, options, withoutMail: false },
  });
  return { patientId, quoteId, email, totalMinor: options[0]?.totalMinor ?? 0, token: tokenOf(quoteId) };
}

/** The patient by HTTP: opens the link and accepts the first option. */
export async function acceptByLink(app: TestApp, quote: IssuedQuote): Promise<Agent> {
  const patient = app.agent();
  await patient.call(openLink, { body: { token: quote.token } });
  const shown = await patient.call(getMyQuote, {});
  await patient.call(acceptMyQuote, {
    body: {
      quoteVersionId: shown.quoteVersionId,
      optionNo: 1,
      typedName: 'Wilma Tester',
      ticks: ['I have read it'],
    },
  });
  return patient;
}

/** The patient opens the hosted page for the deposit. */
export async function openDeposit(patient: Agent, attemptKey: string = randomUUID()) {
  return await patient.call(startMyCheckout, { body: { attemptKey, purpose: 'deposit' } });
}

/** The course an accepted quote became. */
export async function courseOfQuote(app: TestApp, quoteId: number): Promise<number> {
  const [row] = await rawRows<{ course_id: number }>(
    app.deps.db,
    'SELECT course_id FROM courses WHERE quote_id = ?',
    [quoteId],
  );
  if (!row) throw new Error(`Quote ${quoteId} has no course`);
  return row.course_id;
}
