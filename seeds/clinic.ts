import type { Role } from '#contract/define';
import { type ClinicDate, instantAt } from '#domain/time/index';
import { passwordHashing } from '#server/features/users/index';
import type { StaffActor } from '#server/platform/actor';
import { insertRow, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { inTransaction } from '#server/platform/transaction';

/** The zone both invented sites keep. */
export const ZONE = 'Europe/Dublin';

export interface DemoSite {
  readonly siteId: number;
  readonly code: 'LQ' | 'MR';
  readonly tillIds: readonly number[];
}

export type DemoPerson =
  | 'counsellor'
  | 'desk'
  | 'desk2'
  | 'surgeon'
  | 'surgeon2'
  | 'manager'
  | 'manager2'
  | 'auditor';

export interface DemoClinic {
  readonly sites: { readonly LQ: DemoSite; readonly MR: DemoSite };
  readonly people: Readonly<Record<DemoPerson, StaffActor>>;
}

const PEOPLE: readonly {
  readonly key: DemoPerson;
  readonly name: string;
  readonly roles: readonly Role[];
}[] = [
  { key: 'counsellor', name: 'Orla Fenwick', roles: ['counsellor'] },
  { key: 'desk', name: 'Piet Sorrel', roles: ['front_desk'] },
  { key: 'desk2', name: 'Ines Calloway', roles: ['front_desk'] },
  { key: 'surgeon', name: 'Dr Ansel Brannock', roles: ['surgeon'] },
  { key: 'surgeon2', name: 'Dr Juno Ashgrove', roles: ['surgeon'] },
  { key: 'manager', name: 'Hester Vane', roles: ['manager'] },
  { key: 'manager2', name: 'Lucan Thorne', roles: ['manager'] },
  { key: 'auditor', name: 'Wilma Pettigrew', roles: ['auditor'] },
];

/** The invented clinic, its two sites with their tills, and the eight people of the demonstration, all with one password. */
export async function seedClinic(deps: Deps, openedOn: ClinicDate, password: string): Promise<DemoClinic> {
  const passwordHash = await passwordHashing(false).hash(password);
  const createdAt = sqlInstant(instantAt(openedOn, '07:30', ZONE));
  return await inTransaction(deps.db, async (trx) => {
    const clinicId = await insertRow(trx, 'clinics', {
      name: 'Lantern Quay Eye Clinic',
      currency: 'EUR',
      locale: 'en-IE',
      address: '4 Lantern Quay, Saltmarch',
      created_at: createdAt,
    });
    const site = async (
      code: 'LQ' | 'MR',
      name: string,
      address: string,
      tills: readonly string[],
    ): Promise<DemoSite> => {
      const siteId = await insertRow(trx, 'sites', {
        clinic_id: clinicId,
        code,
        name,
        address,
        zone: ZONE,
        opened_on: openedOn,
      });
      const tillIds = [];
      for (const till of tills) tillIds.push(await insertRow(trx, 'tills', { site_id: siteId, name: till }));
      return { siteId, code, tillIds };
    };
    const LQ = await site('LQ', 'Lantern Quay', '4 Lantern Quay, Saltmarch', ['Till 1', 'Till 2']);
    const MR = await site('MR', 'Mill Reach', '21 Mill Reach, Saltmarch', ['Till 1']);
    const siteIds = [LQ.siteId, MR.siteId];
    const people: Partial<Record<DemoPerson, StaffActor>> = {};
    for (const { key, name, roles } of PEOPLE) {
      const email = `${key}@tenderlight.example`;
      const userId = await insertRow(trx, 'users', {
        email,
        name,
        password_hash: passwordHash,
        state: 'active',
        created_at: createdAt,
      });
      await trx('user_roles').insert(roles.map((role) => ({ user_id: userId, role })));
      await trx('user_sites').insert(siteIds.map((siteId) => ({ user_id: userId, site_id: siteId })));
      people[key] = { kind: 'staff', userId, name, roles, siteIds, from: 'demonstration' };
    }
    return { sites: { LQ, MR }, people: people as DemoClinic['people'] };
  });
}
