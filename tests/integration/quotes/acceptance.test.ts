import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import {
  acceptQuoteAtDesk,
  createQuote,
  getQuote,
  listQuotes,
  type QuoteView,
  saveDraft,
  setNextContact,
  withdrawQuote,
} from '#contract/quotes';
import type { OptionDraft } from '#domain/quotes/index';
import { clinicDate, type Instant, instant } from '#domain/time/index';
import { lapseQuotes } from '#server/features/quotes/index';
import { type SteppedClock, steppedClock } from '#server/platform/clock';
import { rawRows } from '#server/platform/db';
import { makeSite, makeUser, type TestSite, type TestUser } from '#tests/factories/house';
import {
  draftQuote,
  issue,
  makePatient,
  prepareEyes,
  putBookInForce,
  rewrite,
} from '#tests/factories/quotes';
import type { Agent } from '#tests/support/agent';
import { type TestApp, testApp } from '#tests/support/test-app';

const START = instant('2026-03-12T09:42:00Z');

let app: TestApp;
let clock: SteppedClock;
let site: TestSite;
let counsellor: TestUser;
let surgeon: TestUser;
let orla: Agent;
let desk: Agent;

beforeAll(async () => {
  clock = steppedClock(START);
  app = await testApp({ clock });
  site = await makeSite(app.deps);
  counsellor = await makeUser(app.deps, ['counsellor'], [site.siteId]);
  surgeon = await makeUser(app.deps, ['surgeon'], [site.siteId]);
  orla = await app.signIn(counsellor.email);
  desk = await app.signIn((await makeUser(app.deps, ['front_desk'], [site.siteId])).email);
  await putBookInForce(app.deps, site.siteId);
});

afterAll(() => app.stop());

async function issued(option: Partial<OptionDraft> = {}): Promise<QuoteView> {
  const { patientId } = await makePatient(orla, site.siteId);
  await prepareEyes(app.deps, patientId, surgeon, counsellor);
  const surgery = { plan: 'same_session', on: clinicDate('2026-04-09') } as const;
  return await issue(orla, await draftQuote(orla, patientId, { surgery, ...option }));
}

async function accept(quote: QuoteView, optionNo = 1, agent = desk) {
  const [version] = quote.versions;
  return await agent.tryCall(acceptQuoteAtDesk, {
    params: { quoteId: quote.quoteId },
    body: {
      quoteVersionId: version?.quoteVersionId ?? 0,
      optionNo,
      typedName: `${quote.patient.givenName} ${quote.patient.familyName}`,
      signedForm: 'paper file, signed today',
    },
  });
}

/** Somebody of the site on another day; sessions end overnight. */
async function on<T>(moment: string, act: (agent: Agent) => Promise<T>): Promise<T> {
  clock.set(instant(moment));
  try {
    return await act(
      await app.signIn((await makeUser(app.deps, ['counsellor', 'front_desk'], [site.siteId])).email),
    );
  } finally {
    clock.set(START as Instant);
  }
}

describe('acceptance at the desk', () => {
  test('of one option · fixes it and opens the course', async () => {
    const quote = await issued();
    const answer = await accept(quote);
    expect(answer.status).toBe(201);
    expect(answer.body).toMatchObject({
      state: 'accepted',
      draft: null,
      acceptance: {
        channel: 'desk',
        optionNo: 1,
        ticks: ['Signed form: paper file, signed today'],
        acceptedOn: '2026-03-12',
      },
    });
    const [course] = await rawRows<{ total_minor: number; accepted_on: string }>(
      app.deps.db,
      'SELECT total_minor, accepted_on FROM courses WHERE course_id = ?',
      [answer.body.courseId ?? 0],
    );
    expect(course).toEqual({
      total_minor: quote.versions[0]?.options[0]?.priced.totalMinor,
      accepted_on: '2026-03-12',
    });
  });

  test('twice, and from two places at once · is one acceptance and one course', async () => {
    const quote = await issued();
    const answers = await Promise.all([accept(quote), accept(quote, 1, orla), accept(quote)]);
    expect(answers.map((answer) => answer.status)).toEqual([201, 201, 201]);
    const [row] = await rawRows<{ courses: number; acceptances: number }>(
      app.deps.db,
      `SELECT (SELECT COUNT(*) FROM courses WHERE quote_id = ?) AS courses,
              (SELECT COUNT(*) FROM quote_acceptances WHERE quote_id = ?) AS acceptances`,
      [quote.quoteId, quote.quoteId],
    );
    expect(row).toEqual({ courses: 1, acceptances: 1 });
  });

  test('of another option afterwards, or of one that is not there · is refused', async () => {
    const quote = await issued();
    expect((await accept(quote, 2)).body.reason).toBe('no_such_option');
    await accept(quote);
    expect((await accept(quote, 2)).body.reason).toBe('quote_accepted');
  });

  test('of a version that has a newer one · is refused', async () => {
    const first = await issued();
    await issue(orla, await orla.call(getQuote, { params: { quoteId: first.quoteId } }));
    const answer = await accept(first);
    expect([answer.status, answer.body.reason]).toEqual([409, 'quote_superseded']);
  });

  test('of an estimate · waits for the surgeon', async () => {
    const { patientId } = await makePatient(orla, site.siteId);
    const begun = await orla.call(createQuote, { body: { patientId } });
    if (!begun.draft?.options[0]) throw new Error('no draft');
    const draft = await rewrite(orla, begun, {
      prescriptions: {
        ...begun.draft.prescriptions,
        OD: { sphere: '-3', cylinder: '', axis: '', vertex: '' },
      },
      options: [{ ...begun.draft.options[0], procedures: { OD: 'lasik', OS: null } }],
    });
    expect((await accept(await issue(orla, draft))).body.reason).toBe('estimate');
  });

  test('from another site · there is no such quote', async () => {
    const quote = await issued();
    const other = await makeSite(app.deps);
    const agent = await app.signIn((await makeUser(app.deps, ['front_desk'], [other.siteId])).email);
    expect((await accept(quote, 1, agent)).status).toBe(404);
  });

  test('after the day of surgery on it · needs another day', async () => {
    const quote = await issued({ surgery: { plan: 'same_session', on: clinicDate('2026-03-20') } });
    const answer = await on('2026-03-21T10:00:00Z', (agent) => accept(quote, 1, agent));
    expect(answer.body.reason).toBe('surgery_day_past');
  });
});

describe('the end of a quote', () => {
  test('by its date · it lapses without anybody doing anything, cannot be accepted, and may be sent anew', async () => {
    const quote = await issued();
    const params = { quoteId: quote.quoteId };
    await on('2026-04-10T22:30:00Z', async (agent) => {
      expect((await agent.call(getQuote, { params })).state).toBe('issued');
    });
    await on('2026-04-10T23:30:00Z', async (agent) => {
      const lapsed = await agent.call(getQuote, { params });
      expect([lapsed.today, lapsed.state]).toEqual(['2026-04-11', 'lapsed']);
      expect((await accept(quote, 1, agent)).body.reason).toBe('quote_lapsed');
      const listed = async (state: 'issued' | 'lapsed') =>
        (await agent.call(listQuotes, { query: { state } })).quotes.some(
          (each) => each.quoteId === quote.quoteId,
        );
      expect([await listed('issued'), await listed('lapsed')]).toEqual([false, true]);
    });
  });

  test('the worker · writes down what has lapsed, once, and only that', async () => {
    const quote = await issued();
    const fresh = await lapseQuotes(app.deps);
    expect(fresh).toBe(0);
    await on('2026-04-11T09:00:00Z', async () => {
      expect(await lapseQuotes(app.deps)).toBeGreaterThan(0);
      expect(await lapseQuotes(app.deps)).toBe(0);
    });
    const [row] = await rawRows<{ state: string }>(
      app.deps.db,
      'SELECT state FROM quotes WHERE quote_id = ?',
      [quote.quoteId],
    );
    expect(row?.state).toBe('lapsed');
  });

  test('withdrawn for a reason · closes the draft; what was accepted cannot be withdrawn', async () => {
    const quote = await issued();
    const params = { quoteId: quote.quoteId };
    const gone = await orla.call(withdrawQuote, { params, body: { reason: 'Chose lenses instead' } });
    expect(gone).toMatchObject({ state: 'withdrawn', withdrawnReason: 'Chose lenses instead', draft: null });
    expect((await accept(quote)).body.reason).toBe('quote_is_closed');
    if (!quote.draft) throw new Error('no draft');
    const late = await orla.tryCall(saveDraft, {
      params,
      body: { draft: quote.draft, draftVersion: gone.draftVersion },
    });
    expect(late.body.reason).toBe('quote_is_closed');
    const accepted = await issued();
    await accept(accepted);
    const refused = await orla.tryCall(withdrawQuote, {
      params: { quoteId: accepted.quoteId },
      body: { reason: 'too late' },
    });
    expect(refused.body.reason).toBe('quote_is_closed');
  });
});

describe('the list', () => {
  test('by state, counsellor, patient, next contact and words · finds the quotes of one’s sites', async () => {
    const quote = await issued();
    const params = { quoteId: quote.quoteId };
    await orla.call(setNextContact, { params, body: { nextContactOn: '2026-03-20' } });
    const finds = async (query: Parameters<typeof orla.call<typeof listQuotes>>[1]['query']) =>
      (await desk.call(listQuotes, { query: query ?? {} })).quotes.some(
        (each) => each.quoteId === quote.quoteId,
      );
    expect(await finds({ state: 'issued', counsellor: counsellor.userId })).toBe(true);
    expect(await finds({ state: 'draft' })).toBe(false);
    expect(await finds({ counsellor: surgeon.userId })).toBe(false);
    expect(await finds({ contactBy: '2026-03-20' })).toBe(true);
    expect(await finds({ contactBy: '2026-03-19' })).toBe(false);
    expect(await finds({ q: quote.number })).toBe(true);
    expect(await finds({ q: `mara ${quote.patient.familyName.slice(0, 8)}` })).toBe(true);
    expect(await finds({ q: '%' })).toBe(false);
    const other = await makeSite(app.deps);
    const stranger = await app.signIn((await makeUser(app.deps, ['counsellor'], [other.siteId])).email);
    expect((await stranger.call(listQuotes, {})).quotes).toEqual([]);
  });
});

describe('what was issued', () => {
  test('cannot be changed even in the database (invariant 15)', async () => {
    const quote = await issued();
    await expect(
      app.deps.db('quote_versions').where({ quote_id: quote.quoteId }).update({ content_hash: 'x' }),
    ).rejects.toMatchObject({ errno: 1142 });
  });
});
