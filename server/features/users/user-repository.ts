import type { Role } from '#contract/define';
import type { UserView } from '#contract/users';
import type { Instant } from '#domain/time/index';
import { type Db, rawRows, type Trx } from '#server/platform/db';

export interface UserRow {
  readonly userId: number;
  readonly email: string;
  readonly name: string;
  readonly passwordHash: string | null;
  readonly state: UserView['state'];
  readonly epoch: number;
  readonly createdAt: Instant;
  readonly leftAt: Instant | null;
  readonly roles: readonly Role[];
  readonly siteIds: readonly number[];
}

async function usersWhere(trx: Db | Trx, where: string, bindings: readonly unknown[]): Promise<UserRow[]> {
  const rows = await rawRows<{
    user_id: number;
    email: string;
    name: string;
    password_hash: string | null;
    state: UserView['state'];
    epoch: number;
    created_at: Instant;
    left_at: Instant | null;
    roles: string | null;
    site_ids: string | null;
  }>(
    trx,
    `SELECT u.user_id, u.email, u.name, u.password_hash, u.state, u.epoch, u.created_at, u.left_at,
            (SELECT GROUP_CONCAT(r.role ORDER BY r.role) FROM user_roles r WHERE r.user_id = u.user_id) AS roles,
            (SELECT GROUP_CONCAT(s.site_id ORDER BY s.site_id) FROM user_sites s WHERE s.user_id = u.user_id) AS site_ids
     FROM users u WHERE ${where}`,
    bindings,
  );
  return rows.map((row) => ({
    userId: row.user_id,
    email: row.email,
    name: row.name,
    passwordHash: row.password_hash,
    state: row.state,
    epoch: row.epoch,
    createdAt: row.created_at,
    leftAt: row.left_at,
    roles: (row.roles ?? '').split(',').filter((role) => role !== '') as Role[],
    siteIds: (row.site_ids ?? '')
      .split(',')
      .filter((id) => id !== '')
      .map(Number),
  }));
}

export async function userById(trx: Db | Trx, userId: number): Promise<UserRow | undefined> {
  return (await usersWhere(trx, 'u.user_id = ?', [userId]))[0];
}

export async function userByEmail(trx: Db | Trx, email: string): Promise<UserRow | undefined> {
  return (await usersWhere(trx, 'u.email = ?', [email]))[0];
}

/** Everybody, by name; those who left last. */
export async function allUsers(trx: Db | Trx): Promise<UserRow[]> {
  return await usersWhere(trx, "1 = 1 ORDER BY u.state = 'left', u.name, u.user_id", []);
}

/** Sets roles and sites anew and raises the epoch, which ends every session of the person. */
export async function setRights(
  trx: Trx,
  userId: number,
  roles: readonly Role[],
  siteIds: readonly number[],
): Promise<void> {
  await trx('user_roles').where({ user_id: userId }).delete();
  await trx('user_sites').where({ user_id: userId }).delete();
  await trx('user_roles').insert([...new Set(roles)].map((role) => ({ user_id: userId, role })));
  await trx('user_sites').insert(
    [...new Set(siteIds)].map((siteId) => ({ user_id: userId, site_id: siteId })),
  );
  await trx('users').where({ user_id: userId }).increment('epoch', 1);
}

/** A user as the manager's screen shows them. */
export function userView(user: UserRow): UserView {
  return {
    userId: user.userId,
    name: user.name,
    email: user.email,
    state: user.state,
    roles: [...user.roles],
    siteIds: [...user.siteIds],
    createdAt: user.createdAt,
    leftAt: user.leftAt,
    version: user.epoch,
  };
}
