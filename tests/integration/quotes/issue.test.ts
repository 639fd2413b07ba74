import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { decideApproval, listApprovals } from '#contract/approvals';
import { approvePlan } from '#contract/patients';
import {
  askDiscountApproval,
  createQuote,
  getQuote,
  issueQuote,
  priceDraft,
  type QuoteView,
  revokeQuoteLinks,
  saveDraft,
  sendQuoteAgain,
} from '#contract/quotes';
import { minor } from '#domain/money/index';
import type { OptionDraft } from '#domain/quotes/index';
import { clinicDate, instant } from '#domain/time/index';
import { steppedClock } from '#server/platform/clock';
import { rawRows } from '#server/platform/db';
import type { FactMap } from '#server/platform/facts';
import { makeSite, makeUser, type TestSite, type TestUser } from '#tests/factories/house';
import {
  asSeen,
  draftQuote,
  issue,
  makePatient,
  prepareEyes,
  putBookInForce,
  rewrite,
} from '#tests/factories/quotes';
import type { Agent } from '#tests/support/agent';
import { type TestApp, testApp } from '#tests/support/test-app';

let app: TestApp;
let site: TestSite;
let counsellor: TestUser;
let surgeon: TestUser;
let orla: Agent;
let manager: Agent;
let elsewhere: Agent;
const told: FactMap['quote.issued'][] = [];

beforeAll(async () => {
  app = await testApp({ clock: steppedClock(instant('2026-03-12T09:42:00Z')) });
  app.deps.facts.subscribe('quote.issued', async (_trx, fact) => {
    told.push(fact);
  });
  site = await makeSite(app.deps);
  counsellor = await makeUser(app.deps, ['counsellor'], [site.siteId]);
  surgeon = await makeUser(app.deps, ['surgeon'], [site.siteId]);
  orla = await app.signIn(counsellor.email);
  manager = await app.signIn((await makeUser(app.deps, ['manager'], [site.siteId])).email);
  const other = await makeSite(app.deps);
  elsewhere = await app.signIn((await makeUser(app.deps, ['counsellor'], [other.siteId])).email);
  await putBookInForce(app.deps, site.siteId);
});

afterAll(() => app.stop());

const AS_DRAWN: Partial<OptionDraft> = {
  procedures: { OD: 'lenticule-extraction', OS: 'surface-ablation' },
  covers: { OD: 'cover-24', OS: 'cover-24' },
  surgery: { plan: 'same_session', on: clinicDate('2026-04-09') },
  priceListId: 'hospital-staff',
};

async function ready(option: Partial<OptionDraft> = AS_DRAWN, email?: null): Promise<QuoteView> {
  const { patientId } = await makePatient(orla, site.siteId, email === null ? { email } : {});
  await prepareEyes(app.deps, patientId, surgeon, counsellor);
  return await draftQuote(orla, patientId, option);
}

/** Links that went out for a quote, as whoever mails them is told. */
function linksOf(quote: QuoteView): string[] {
  return told.filter((fact) => fact.quoteId === quote.quoteId).map((fact) => fact.linkUrl ?? '');
}

describe('beginning a quote', () => {
  test('for a patient with a plan · starts from eyes, procedures and the site’s number', async () => {
    const { patientId } = await makePatient(orla, site.siteId);
    await prepareEyes(app.deps, patientId, surgeon, counsellor);
    const quote = await orla.call(createQuote, { body: { patientId } });
    expect(quote.number).toMatch(new RegExp(`^${site.code}-\\d{4}$`));
    expect(quote.draft?.prescriptions.OD).toEqual({
      sphere: '−2.00',
      cylinder: '−1.50',
      axis: '75',
      vertex: '',
    });
    expect(quote.draft?.options[0]?.procedures).toEqual({
      OD: 'lenticule-extraction',
      OS: 'surface-ablation',
    });
    const again = await orla.call(createQuote, { body: { patientId } });
    expect(again.quoteId).toBe(quote.quoteId);
  });

  test('of another site’s patient · there is no such patient', async () => {
    const { patientId } = await makePatient(orla, site.siteId);
    expect((await elsewhere.tryCall(createQuote, { body: { patientId } })).status).toBe(404);
  });
});

describe('writing a draft', () => {
  test('as drawn · prices to 4,560.00, in either cylinder sign', async () => {
    const quote = await ready();
    expect(quote.prices).toMatchObject([{ ok: true, totalMinor: 456_000, standing: 'quotable' }]);
    if (!quote.draft) throw new Error('no draft');
    const other = await rewrite(orla, quote, {
      ...quote.draft,
      prescriptions: {
        OD: { sphere: '-3.50', cylinder: '+1.50', axis: '165', vertex: '' },
        OS: { sphere: '-3.25', cylinder: '+0.50', axis: '20', vertex: '' },
      },
    });
    expect(other.prices).toMatchObject([{ ok: true, totalMinor: 456_000 }]);
  });

  test('unfinished · is kept as typed and says what is missing', async () => {
    const quote = await ready();
    if (!quote.draft) throw new Error('no draft');
    const typed = {
      ...quote.draft.prescriptions,
      OD: { sphere: '-2', cylinder: '-1.5', axis: '', vertex: '' },
    };
    const saved = await rewrite(orla, quote, { ...quote.draft, prescriptions: typed });
    expect(saved.draft?.prescriptions.OD.axis).toBe('');
    expect(saved.prices).toMatchObject([
      { ok: false, refusals: [{ field: 'eyes.OD.prescription.axis', words: 'The cylinder has no axis.' }] },
    ]);
  });

  test('by two people · the second hears of it and overwrites nothing', async () => {
    const quote = await ready();
    if (!quote.draft) throw new Error('no draft');
    const params = { quoteId: quote.quoteId };
    const body = { draft: quote.draft, draftVersion: quote.draftVersion };
    await manager.call(saveDraft, { params, body });
    const late = await orla.tryCall(saveDraft, { params, body });
    expect([late.status, late.body.reason]).toEqual([409, 'draft_changed']);
  });

  test('asked for its price · the server gives the same course, whole, and stores nothing', async () => {
    const quote = await ready();
    if (!quote.draft) throw new Error('no draft');
    const params = { quoteId: quote.quoteId };
    const { options } = await orla.call(priceDraft, { params, body: { draft: quote.draft } });
    const [option] = options;
    const [seen] = asSeen(quote);
    expect(option?.ok && [option.priced.totalMinor, option.contentHash]).toEqual([
      456_000,
      seen?.contentHash,
    ]);
    expect((await orla.call(getQuote, { params })).draftVersion).toBe(quote.draftVersion);
  });
});

describe('issuing', () => {
  test('what was seen · freezes price, book and hash, and mails the link once', async () => {
    const quote = await ready();
    const issued = await issue(orla, quote);
    expect(issued.state).toBe('issued');
    expect(issued.versions).toMatchObject([
      {
        versionNo: 1,
        validUntil: '2026-04-10',
        options: [{ label: 'Both eyes on one day', priced: { totalMinor: 456_000 } }],
      },
    ]);
    expect(issued.links).toMatchObject([{ works: true, sentTo: quote.patient.email, firstOpenedAt: null }]);
    const links = linksOf(quote);
    expect(links).toHaveLength(1);
    const token = /\/q\/([\w-]{43})$/.exec(links[0] ?? '')?.[1] ?? '';
    const [link] = await rawRows<{ found: number }>(
      app.deps.db,
      'SELECT COUNT(*) AS found FROM quote_links WHERE token_hash = UNHEX(SHA2(?, 256)) AND quote_id = ?',
      [token, quote.quoteId],
    );
    expect(link?.found).toBe(1);
    expect(JSON.stringify(issued)).not.toContain(token);
  });

  test('a total, a hash, a number of options that is not the server’s · is refused, nothing is sent', async () => {
    const quote = await ready();
    const [seen] = asSeen(quote);
    if (!seen) throw new Error('no price');
    const params = { quoteId: quote.quoteId };
    const attempt = async (options: (typeof seen)[]) =>
      await orla.tryCall(issueQuote, { params, body: { draftVersion: quote.draftVersion, options } });
    const cheaper = await attempt([{ ...seen, totalMinor: minor(seen.totalMinor - 100) }]);
    expect([cheaper.status, cheaper.body.reason, cheaper.body.errors?.[0]?.field]).toEqual([
      409,
      'figures_differ',
      'options.0.totalMinor',
    ]);
    const other = await attempt([{ ...seen, contentHash: 'f'.repeat(64) }]);
    expect([other.body.reason, other.body.errors?.[0]?.field]).toEqual([
      'figures_differ',
      'options.0.contentHash',
    ]);
    expect((await attempt([seen, seen])).body.reason).toBe('figures_differ');
    const after = await orla.call(getQuote, { params });
    expect([after.state, after.versions.length, after.links.length]).toEqual(['draft', 0, 0]);
    expect(linksOf(quote)).toEqual([]);
  });

  test('clicked twice · issues once', async () => {
    const quote = await ready();
    const both = await Promise.all(
      [1, 2].map(() =>
        orla.tryCall(issueQuote, {
          params: { quoteId: quote.quoteId },
          body: { draftVersion: quote.draftVersion, options: asSeen(quote) },
        }),
      ),
    );
    expect(both.map((answer) => answer.status).sort()).toEqual([201, 409]);
    expect((await orla.call(getQuote, { params: { quoteId: quote.quoteId } })).versions).toHaveLength(1);
    expect(linksOf(quote)).toHaveLength(1);
  });

  test('with something unfinished · names every field of every option', async () => {
    const quote = await ready();
    if (!quote.draft) throw new Error('no draft');
    const [first] = quote.draft.options;
    if (!first) throw new Error('no option');
    const two = await rewrite(orla, quote, {
      ...quote.draft,
      options: [
        first,
        {
          ...first,
          procedures: { OD: 'lasik', OS: null },
          discounts: [{ discountId: 'goodwill', size: '' }],
        },
      ],
    });
    const answer = await orla.tryCall(issueQuote, {
      params: { quoteId: two.quoteId },
      body: {
        draftVersion: two.draftVersion,
        options: [{ totalMinor: minor(1), contentHash: '0'.repeat(64) }],
      },
    });
    expect([answer.status, answer.body.reason]).toEqual([422, 'cannot_be_priced']);
    expect(answer.body.errors?.map((error) => error.field)).toEqual(['options.1.discounts.0.off']);
  });

  test('a procedure the surgeon has not approved · is refused at its eye', async () => {
    const quote = await ready({ ...AS_DRAWN, procedures: { OD: 'lasik', OS: 'surface-ablation' } });
    expect(quote.prices).toMatchObject([
      { ok: false, refusals: [{ field: 'eyes.OD.procedureId', code: 'not_approved' }] },
    ]);
  });

  test('without a plan · is an estimate; with the plan it is issued anew as the next version', async () => {
    const { patientId } = await makePatient(orla, site.siteId);
    const begun = await orla.call(createQuote, { body: { patientId } });
    if (!begun.draft?.options[0]) throw new Error('no draft');
    const estimate = await rewrite(orla, begun, {
      prescriptions: {
        ...begun.draft.prescriptions,
        OD: { sphere: '-3', cylinder: '', axis: '', vertex: '' },
      },
      options: [{ ...begun.draft.options[0], procedures: { OD: 'lasik', OS: null } }],
    });
    const first = await issue(orla, estimate);
    expect(first.versions[0]).toMatchObject({
      surgeonName: null,
      options: [{ priced: { standing: 'estimate' } }],
    });
    await (await app.signIn(surgeon.email)).call(approvePlan, {
      params: { patientId },
      body: { OD: ['lasik'], OS: [] },
    });
    const second = await issue(orla, await orla.call(getQuote, { params: { quoteId: begun.quoteId } }));
    expect(
      second.versions.map((version) => [version.versionNo, version.options[0]?.priced.standing]),
    ).toEqual([
      [2, 'quotable'],
      [1, 'estimate'],
    ]);
  });

  test('no address, no mail · says so; by hand it goes without a link', async () => {
    const quote = await ready(AS_DRAWN, null);
    const answer = await orla.tryCall(issueQuote, {
      params: { quoteId: quote.quoteId },
      body: { draftVersion: quote.draftVersion, options: asSeen(quote) },
    });
    expect([answer.status, answer.body.reason]).toEqual([422, 'no_email']);
    const issued = await issue(orla, quote, true);
    expect([issued.state, issued.links]).toEqual(['issued', []]);
  });

  test('from another site · there is no such quote', async () => {
    const quote = await ready();
    const params = { quoteId: quote.quoteId };
    expect((await elsewhere.tryCall(getQuote, { params })).status).toBe(404);
    const body = { draftVersion: quote.draftVersion, options: asSeen(quote) };
    expect((await elsewhere.tryCall(issueQuote, { params, body })).status).toBe(404);
  });
});

describe('a discount over the counsellor’s limit', () => {
  test('waits for a manager, who may not have asked; then it goes', async () => {
    const quote = await ready({ ...AS_DRAWN, discounts: [{ discountId: 'goodwill', size: '7' }] });
    const params = { quoteId: quote.quoteId };
    const send = async (from: QuoteView) =>
      await orla.tryCall(issueQuote, {
        params,
        body: { draftVersion: from.draftVersion, options: asSeen(from) },
      });
    const refused = await send(quote);
    expect([refused.status, refused.body.reason, refused.body.errors?.[0]?.field]).toEqual([
      422,
      'approval_needed',
      'options.0.discounts.0.off',
    ]);
    const ask = { draftVersion: quote.draftVersion, reason: 'Sister of a patient' };
    const asked = await orla.call(askDiscountApproval, { params, body: ask });
    expect(asked.approval).toMatchObject({ state: 'asked', requestedBy: counsellor.name });
    expect((await orla.tryCall(askDiscountApproval, { params, body: ask })).body.reason).toBe(
      'already_asked',
    );
    const { approvals } = await manager.call(listApprovals, {});
    const mine = approvals.find(
      (approval) => approval.subjectId === quote.quoteId && approval.kind === 'quote_discount',
    );
    expect(mine).toMatchObject({ amountMinor: expect.any(Number), reason: 'Sister of a patient' });
    const decision = { params: { approvalId: mine?.approvalId ?? 0 }, body: { approve: true } };
    expect((await orla.tryCall(decideApproval, decision)).status).toBe(403);
    await manager.call(decideApproval, decision);
    expect((await send(quote)).status).toBe(201);
  });

  test('approved at seven, raised to eight · waits again', async () => {
    const quote = await ready({ ...AS_DRAWN, discounts: [{ discountId: 'goodwill', size: '7' }] });
    const params = { quoteId: quote.quoteId };
    await orla.call(askDiscountApproval, {
      params,
      body: { draftVersion: quote.draftVersion, reason: 'a friend' },
    });
    const { approvals } = await manager.call(listApprovals, {});
    const approvalId = approvals.find((approval) => approval.subjectId === quote.quoteId)?.approvalId ?? 0;
    await manager.call(decideApproval, { params: { approvalId }, body: { approve: true } });
    if (!quote.draft?.options[0]) throw new Error('no draft');
    const raised = await rewrite(orla, quote, {
      ...quote.draft,
      options: [{ ...quote.draft.options[0], discounts: [{ discountId: 'goodwill', size: '8' }] }],
    });
    const answer = await orla.tryCall(issueQuote, {
      params,
      body: { draftVersion: raised.draftVersion, options: asSeen(raised) },
    });
    expect(answer.body.reason).toBe('approval_needed');
  });

  test('within the limit · nothing is to be approved', async () => {
    const quote = await ready({ ...AS_DRAWN, discounts: [{ discountId: 'goodwill', size: '5' }] });
    const answer = await orla.tryCall(askDiscountApproval, {
      params: { quoteId: quote.quoteId },
      body: { draftVersion: quote.draftVersion, reason: 'just to be sure' },
    });
    expect(answer.body.reason).toBe('nothing_to_approve');
  });
});

describe('links', () => {
  test('sent again · only the newest works; revoked · none does', async () => {
    const quote = await issue(orla, await ready());
    const params = { quoteId: quote.quoteId };
    const again = await orla.call(sendQuoteAgain, { params, body: {} });
    expect(again.links.map((link) => link.works)).toEqual([true, false]);
    expect(linksOf(quote)).toHaveLength(2);
    const revoked = await orla.call(revokeQuoteLinks, { params });
    expect(revoked.links.map((link) => link.works)).toEqual([false, false]);
  });
});
