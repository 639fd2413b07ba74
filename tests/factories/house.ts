import type { Role } from '#contract/define';
import type { AppDeps } from '#server/app';
import { passwordHashing } from '#server/features/users/index';
import type { StaffActor } from '#server/platform/actor';
import { insertRow, sqlInstant } from '#server/platform/db';
import { inTransaction } from '#server/platform/transaction';
import { TEST_PASSWORD } from '#tests/support/test-app';

type Deps = Pick<AppDeps, 'db' | 'clock'>;

let counter = 0;

/** Different in every test process and call: makes names that never meet. */
export function unique(prefix: string): string {
  counter += 1;
  return `${prefix}${process.pid.toString(36)}${counter.toString(36)}`;
}

/** The one clinic of a worker's database. */
export async function makeClinic({ db, clock }: Deps): Promise<number> {
  return await inTransaction(db, async (trx) => {
    await trx.raw(
      `INSERT IGNORE INTO clinics (clinic_id, name, currency, locale, address, created_at) VALUES (1, 'Test Clinic', 'EUR', 'en', '1 Test Street', ?)`,
      [sqlInstant(clock.now())],
    );
    return 1;
  });
}

export interface TestSite {
  readonly siteId: number;
  readonly code: string;
  readonly tillId: number;
}

/** A site of the test's own with one till. */
export async function makeSite(deps: Deps): Promise<TestSite> {
  const clinicId = await makeClinic(deps);
  return await inTransaction(deps.db, async (trx) => {
    const code = unique('T').toUpperCase().slice(-6);
    const siteId = await insertRow(trx, 'sites', {
      clinic_id: clinicId,
      code,
      name: `Site ${code}`,
      address: '2 Test Street',
      zone: 'Europe/Dublin',
      opened_on: '2026-01-05',
    });
    const tillId = await insertRow(trx, 'tills', { site_id: siteId, name: 'Till 1' });
    return { siteId, code, tillId };
  });
}

export interface TestUser {
  readonly userId: number;
  readonly email: string;
  readonly name: string;
  readonly actor: StaffActor;
}

/** Somebody who can sign in with TEST_PASSWORD. */
export async function makeUser(
  deps: Deps,
  roles: readonly Role[],
  siteIds: readonly number[],
): Promise<TestUser> {
  const email = `${unique('person')}@test.example`;
  const name = `Person ${unique('')}`;
  const passwordHash = await passwordHashing(true).hash(TEST_PASSWORD);
  const userId = await inTransaction(deps.db, async (trx) => {
    const id = await insertRow(trx, 'users', {
      email,
      name,
      password_hash: passwordHash,
      state: 'active',
      created_at: sqlInstant(deps.clock.now()),
    });
    await trx('user_roles').insert(roles.map((role) => ({ user_id: id, role })));
    if (siteIds.length > 0)
      await trx('user_sites').insert(siteIds.map((siteId) => ({ user_id: id, site_id: siteId })));
    return id;
  });
  return { userId, email, name, actor: { kind: 'staff', userId, name, roles, siteIds, from: 'test' } };
}
