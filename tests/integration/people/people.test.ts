import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { listReceipts } from '#contract/payments';
import { getSession, signIn, signOut } from '#contract/session';
import { getToday } from '#contract/today';
import { askPasswordReset, changeUser, inviteUser, leaveUser, listUsers, setPassword } from '#contract/users';
import { rawRows } from '#server/platform/db';
import { type Mailbox, startMailbox } from '#stand-ins/mailbox/start-mailbox';
import { makeSite, makeUser, type TestSite, type TestUser, unique } from '#tests/factories/house';
import { TEST_PASSWORD, type TestApp, testApp } from '#tests/support/test-app';

let mailbox: Mailbox;
let app: TestApp;
let site: TestSite;
let manager: TestUser;

beforeAll(async () => {
  mailbox = await startMailbox();
  app = await testApp({ smtpUrl: mailbox.smtpUrl });
  site = await makeSite(app.deps);
  manager = await makeUser(app.deps, ['manager'], [site.siteId]);
});
afterAll(async () => {
  await app.stop();
  await mailbox.stop();
});

describe('signing in', () => {
  test('the right password · renews the session and gives roles, sites and a token', async () => {
    const user = await makeUser(app.deps, ['front_desk'], [site.siteId]);
    const agent = app.agent();
    const session = await agent.call(signIn, {
      body: { email: user.email.toUpperCase(), password: TEST_PASSWORD },
    });
    expect(session.person?.roles).toEqual(['front_desk']);
    expect(session.sites.map((each) => each.siteId)).toEqual([site.siteId]);
    const first = agent.cookie('tl.sid');
    agent.csrfToken = session.csrfToken;
    await agent.call(signIn, { body: { email: user.email, password: TEST_PASSWORD } });
    expect(agent.cookie('tl.sid')).not.toBe(first);
    const stored = await rawRows<{ n: number }>(
      app.deps.db,
      'SELECT COUNT(*) AS n FROM sessions WHERE data LIKE ?',
      [`%${decodeURIComponent(first ?? '').slice(2, 20)}%`],
    );
    expect(stored[0]?.n).toBe(0);
  });

  test('an unknown address and a wrong password · are answered alike', async () => {
    const user = await makeUser(app.deps, ['front_desk'], [site.siteId]);
    const wrong = await app
      .agent()
      .tryCall(signIn, { body: { email: user.email, password: 'not the password' } });
    const unknown = await app
      .agent()
      .tryCall(signIn, { body: { email: `${unique('nobody')}@test.example`, password: 'not the password' } });
    expect([wrong.status, wrong.body]).toEqual([unknown.status, unknown.body]);
    expect(wrong.status).toBe(401);
  });

  test('too many wrong passwords · rest the account in every process, the right one included', async () => {
    const limits = {
      perAccount: { name: unique('acc'), limit: 3, windowMs: 900_000 },
      perAddress: { name: unique('adr'), limit: 1_000, windowMs: 900_000 },
    };
    const [one, two] = [await testApp({ limits }), await testApp({ limits })];
    const user = await makeUser(app.deps, ['front_desk'], [site.siteId]);
    for (const each of [one, two, one]) {
      expect(
        (await each.agent().tryCall(signIn, { body: { email: user.email, password: 'not the password' } }))
          .status,
      ).toBe(401);
    }
    const answer = await two
      .agent()
      .tryCall(signIn, { body: { email: user.email, password: TEST_PASSWORD } });
    expect([answer.status, answer.body.reason]).toEqual([429, 'account_resting']);
    expect(Number(answer.headers.get('retry-after'))).toBeGreaterThan(0);
    await one.stop();
    await two.stop();
  });

  test('a sign-in from another site’s page · is refused', async () => {
    const answer = await app
      .agent()
      .send(
        'POST',
        '/api/session',
        { email: manager.email, password: TEST_PASSWORD },
        { origin: 'https://elsewhere.example', 'sec-fetch-site': 'cross-site' },
      );
    expect(answer.status).toBe(403);
  });

  test('signing out · ends the session', async () => {
    const agent = await app.signIn(manager.email);
    await agent.call(signOut, {});
    expect((await agent.call(getSession, {})).person).toBeNull();
  });
});

describe('rights', () => {
  test('another site · does not exist for those who do not work there', async () => {
    const elsewhere = await makeSite(app.deps);
    const desk = await app.signIn((await makeUser(app.deps, ['front_desk'], [site.siteId])).email);
    expect((await desk.tryCall(getToday, { params: { siteId: elsewhere.siteId }, query: {} })).status).toBe(
      404,
    );
    expect(
      (
        await desk.tryCall(listReceipts, {
          params: { siteId: elsewhere.siteId },
          query: { day: '2026-03-12' },
        })
      ).status,
    ).toBe(404);
  });

  test('changed rights · end the person’s sessions at once', async () => {
    const user = await makeUser(app.deps, ['front_desk'], [site.siteId]);
    const theirs = await app.signIn(user.email);
    const mine = await app.signIn(manager.email);
    const { users } = await mine.call(listUsers, {});
    const version = users.find((each) => each.userId === user.userId)?.version ?? 0;
    await mine.call(changeUser, {
      params: { userId: user.userId },
      body: { roles: ['counsellor'], siteIds: [site.siteId], version },
    });
    expect((await theirs.call(getSession, {})).person).toBeNull();
    const stale = await mine.tryCall(changeUser, {
      params: { userId: user.userId },
      body: { roles: ['manager'], siteIds: [site.siteId], version },
    });
    expect([stale.status, stale.body.reason]).toEqual([409, 'stale']);
  });

  test('one’s own rights, and those of the last manager · are not one’s to change', async () => {
    const mine = await app.signIn(manager.email);
    const own = await mine.tryCall(changeUser, {
      params: { userId: manager.userId },
      body: { roles: ['front_desk'], siteIds: [site.siteId], version: 1 },
    });
    expect([own.status, own.body.reason]).toEqual([422, 'own_rights']);
  });

  test('somebody who leaves · is out at once and cannot come back', async () => {
    const user = await makeUser(app.deps, ['front_desk'], [site.siteId]);
    const theirs = await app.signIn(user.email);
    const mine = await app.signIn(manager.email);
    expect((await mine.call(leaveUser, { params: { userId: user.userId } })).state).toBe('left');
    expect((await theirs.call(getSession, {})).person).toBeNull();
    expect(
      (await app.agent().tryCall(signIn, { body: { email: user.email, password: TEST_PASSWORD } })).status,
    ).toBe(401);
  });
});

describe('by mail', () => {
  test('an invitation · arrives, sets a password once, and lets the person in', async () => {
    const mine = await app.signIn(manager.email);
    const email = `${unique('guest')}@test.example`;
    await mine.call(inviteUser, {
      body: { name: 'New Person', email, roles: ['counsellor'], siteIds: [site.siteId] },
    });
    await app.settle();
    const mail = (await mailbox.mails()).find((each) => each.to === email);
    const token = /set-password#([A-Za-z0-9_-]+)/.exec(mail?.text ?? '')?.[1] ?? '';
    const password = 'a sentence long enough';
    expect((await app.agent().tryCall(setPassword, { body: { token, password: 'short' } })).status).toBe(422);
    await app.agent().call(setPassword, { body: { token, password } });
    expect((await app.agent().call(signIn, { body: { email, password } })).person?.name).toBe('New Person');
    const again = await app.agent().tryCall(setPassword, { body: { token, password } });
    expect([again.status, again.body.reason]).toEqual([410, 'link_used_or_old']);
    const stored = await rawRows<{ n: number }>(
      app.deps.db,
      'SELECT COUNT(*) AS n FROM user_invitations WHERE token_hash = ?',
      [token],
    );
    expect(stored[0]?.n).toBe(0);
  });

  test('a reset for nobody · is answered like any other and sends nothing', async () => {
    const before = (await mailbox.mails()).length;
    expect(
      await app.agent().call(askPasswordReset, { body: { email: `${unique('nobody')}@test.example` } }),
    ).toEqual({ sent: true });
    await app.settle();
    expect((await mailbox.mails()).length).toBe(before);
  });
});

test('the database away for a while · requests fail with words and the process lives', async () => {
  const other = await testApp();
  const agent = await other.signIn(manager.email);
  await other.deps.db.destroy();
  const answer = await agent.send('GET', '/api/session');
  expect(answer.status).toBeGreaterThanOrEqual(500);
  expect((answer.body as { detail: string }).detail).not.toContain('ECONN');
  other.deps.db.initialize();
  expect((await agent.call(getSession, {})).person?.userId).toBe(manager.userId);
  await other.stop();
});
