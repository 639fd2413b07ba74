import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { signIn } from '#contract/session';
import { setPassword } from '#contract/users';
import { rawRows } from '#server/platform/db';
import { type TestApp, testApp } from '#tests/support/test-app';
import { freshDatabase, type TestDatabase } from '#tests/support/test-database';

const ROOT = fileURLToPath(new URL('../../..', import.meta.url));
const FIRST = {
  clinic: { name: 'New Clinic', address: '1 New Street', currency: 'EUR' },
  site: { code: 'NC', name: 'New Street', address: '1 New Street', zone: 'Europe/Dublin' },
  manager: { name: 'First Manager', email: 'first@new.example' },
};

let database: TestDatabase;
let app: TestApp;

beforeAll(async () => {
  database = await freshDatabase('opening');
  app = await testApp({ database });
});
afterAll(() => app.stop());

/** The command as somebody going live runs it. */
function run(input: unknown) {
  return spawnSync(process.execPath, ['--conditions=source', '--import', 'tsx', 'server/open-clinic.ts'], {
    cwd: ROOT,
    input: JSON.stringify(input),
    encoding: 'utf8',
    env: {
      ...process.env,
      NODE_ENV: 'test',
      DATABASE_URL: database.appUrl,
      SESSION_SECRET: 'a secret of tests, long enough to pass',
      STRIPE_SECRET_KEY: 'sk_test_tenderlight_local',
      STRIPE_WEBHOOK_SECRET: 'whsec_tenderlight_local',
      SMTP_URL: 'smtp://127.0.0.1:9',
      PUBLIC_URL: app.baseUrl,
    },
  });
}

describe('going live in an empty database', () => {
  test('wrong input · names each field and makes nothing', async () => {
    const answer = run({ ...FIRST, site: { ...FIRST.site, zone: 'Nowhere/At all', code: 'lower' } });
    expect(answer.status).toBe(1);
    expect(answer.stderr).toContain('site.zone');
    expect(answer.stderr).toContain('site.code');
    expect(await rawRows(app.deps.db, 'SELECT clinic_id FROM clinics')).toEqual([]);
  });

  test('the first manager · is invited, sets a password and signs in; a second opening is refused', async () => {
    const answer = run(FIRST);
    expect([answer.status, answer.stderr]).toEqual([0, '']);
    const token = /set-password#([A-Za-z0-9_-]+)/.exec(answer.stdout)?.[1] ?? '';
    await app.agent().call(setPassword, { body: { token, password: 'a sentence long enough' } });
    const session = await app
      .agent()
      .call(signIn, { body: { email: FIRST.manager.email, password: 'a sentence long enough' } });
    expect([session.person?.roles, session.sites.map((site) => site.code)]).toEqual([['manager'], ['NC']]);
    const mails = await rawRows<{ recipient: string }>(app.deps.db, 'SELECT recipient FROM outbox_mails');
    expect(mails.map((mail) => mail.recipient)).toEqual([FIRST.manager.email]);
    const again = run(FIRST);
    expect([again.status, again.stderr.includes('There is a clinic in this database already')]).toEqual([
      1,
      true,
    ]);
  });
});
