import { createHash, randomBytes } from 'node:crypto';
import type { Role } from '#contract/define';
import { addMs } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import type { StaffActor } from '#server/platform/actor';
import { SYSTEM } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant, type Trx } from '#server/platform/db';
import { isDuplicate, isMissingParent } from '#server/platform/db-errors';
import type { Deps } from '#server/platform/deps';
import { type MailText, queueMail } from '#server/platform/outbox';
import { conflict, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import type { PasswordHashing } from './password.ts';
import { setRights, type UserRow, userByEmail, userById } from './user-repository.ts';

const INVITATION_MS = 7 * 24 * 60 * 60 * 1000;
const RESET_MS = 60 * 60 * 1000;

/** Words of the mails, made by the documents feature and handed in by the composition root. */
export interface PeopleMails {
  invitation(about: { name: string; invitedBy: string; url: string }): MailText;
  reset(about: { name: string; url: string }): MailText;
}

export interface Rights {
  readonly roles: readonly Role[];
  readonly siteIds: readonly number[];
}

/** Invites somebody: a user who cannot sign in until they have set a password by the mailed link. */
export async function inviteToClinic(
  deps: Deps,
  mails: PeopleMails,
  person: { readonly name: string; readonly email: string } & Rights,
  actor: StaffActor,
): Promise<UserRow> {
  return await inTransaction(deps.db, async (trx) => {
    mustWorkAtAll(actor, person.siteIds);
    const userId = await insertInvited(trx, deps, person);
    await applyRights(trx, userId, person);
    const url = await issueToken(trx, deps, userId, 'invitation', INVITATION_MS);
    await queueMail(trx, deps, {
      kind: 'invitation',
      dedupeKey: `invitation-${userId}-${deps.clock.now()}`,
      to: person.email,
      mail: mails.invitation({ name: person.name, invitedBy: actor.name, url }),
      attachments: [],
      subjectType: 'user',
      subjectId: userId,
    });
    await recordAudit(trx, deps, {
      actor,
      action: 'user.invited',
      subjectType: 'user',
      subjectId: userId,
      after: { name: person.name, email: person.email, roles: person.roles, siteIds: person.siteIds },
    });
    return await mustExist(trx, userId);
  });
}

/** A user who cannot sign in until a password is set. Throws conflict 'email_taken'. */
export async function insertInvited(
  trx: Trx,
  deps: Deps,
  person: { readonly name: string; readonly email: string },
): Promise<number> {
  try {
    return await insertRow(trx, 'users', {
      email: person.email,
      name: person.name,
      state: 'invited',
      created_at: sqlInstant(deps.clock.now()),
    });
  } catch (error) {
    if (isDuplicate(error, 'users_email'))
      throw conflict('email_taken', 'Somebody with this e-mail address is there already.');
    throw error;
  }
}

/** Gives roles and sites; throws not_found for a site that is none. */
export async function applyRights(trx: Trx, userId: number, rights: Rights): Promise<void> {
  try {
    await setRights(trx, userId, rights.roles, rights.siteIds);
  } catch (error) {
    if (isMissingParent(error)) throw notFound('site');
    throw error;
  }
}

/** Sites a manager does not work at are not theirs to give. */
function mustWorkAtAll(actor: StaffActor, siteIds: readonly number[]): void {
  if (siteIds.some((siteId) => !actor.siteIds.includes(siteId))) throw notFound('site');
}

/** Changes roles and sites; the person's sessions end. Nobody changes their own, and one manager always stays. */
export async function changeRights(
  deps: Deps,
  userId: number,
  rights: Rights,
  version: number,
  actor: StaffActor,
): Promise<UserRow> {
  return await inTransaction(deps.db, async (trx) => {
    const user = await lockUser(trx, userId);
    mustBeOther(user, actor);
    if (user.epoch !== version)
      throw conflict('stale', `${user.name}’s rights were changed meanwhile. Look again, then change them.`);
    mustWorkAtAll(actor, rights.siteIds);
    if (!rights.roles.includes('manager')) await mustLeaveAManager(trx, userId);
    await applyRights(trx, userId, rights);
    await recordAudit(trx, deps, {
      actor,
      action: 'user.changed',
      subjectType: 'user',
      subjectId: userId,
      before: { roles: user.roles, siteIds: user.siteIds },
      after: rights,
    });
    return await mustExist(trx, userId);
  });
}

/** Somebody leaves: sessions and links end at once, the name stays in the history. */
export async function endAccess(deps: Deps, userId: number, actor: StaffActor): Promise<UserRow> {
  return await inTransaction(deps.db, async (trx) => {
    const user = await lockUser(trx, userId);
    mustBeOther(user, actor);
    await mustLeaveAManager(trx, userId);
    const now = sqlInstant(deps.clock.now());
    await trx('users')
      .where({ user_id: userId })
      .update({ state: 'left', left_at: now, password_hash: null, epoch: trx.raw('epoch + 1') });
    await trx('user_invitations').where({ user_id: userId, used_at: null }).update({ used_at: now });
    await recordAudit(trx, deps, { actor, action: 'user.left', subjectType: 'user', subjectId: userId });
    return await mustExist(trx, userId);
  });
}

/** Sends a reset link where the address is that of an active person; says nothing either way. */
export async function askForReset(deps: Deps, mails: PeopleMails, email: string): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const user = await userByEmail(trx, email);
    if (user?.state !== 'active') return;
    const url = await issueToken(trx, deps, user.userId, 'reset', RESET_MS);
    await queueMail(trx, deps, {
      kind: 'password_reset',
      dedupeKey: `reset-${user.userId}-${deps.clock.now()}`,
      to: email,
      mail: mails.reset({ name: user.name, url }),
      attachments: [],
      subjectType: 'user',
      subjectId: user.userId,
    });
    await recordAudit(trx, deps, {
      actor: SYSTEM,
      action: 'user.reset_asked',
      subjectType: 'user',
      subjectId: user.userId,
    });
  });
}

/** Sets a password with the secret of a mail, once. Every session of the person ends. Throws gone for a used or old secret. */
export async function setPasswordByToken(
  deps: Deps,
  hashing: PasswordHashing,
  token: string,
  password: string,
): Promise<{ email: string }> {
  const passwordHash = await hashing.hash(password);
  return await inTransaction(deps.db, async (trx) => {
    const [row] = await rawRows<{ user_invitation_id: number; user_id: number }>(
      trx,
      `SELECT user_invitation_id, user_id FROM user_invitations WHERE token_hash = ? AND used_at IS NULL AND expires_at > ? FOR UPDATE`,
      [tokenDigest(token), sqlInstant(deps.clock.now())],
    );
    if (!row)
      throw new Problem('gone', {
        reason: 'link_used_or_old',
        detail: 'This link was used or has run out. Ask for a new one on the sign-in page.',
      });
    const user = await lockUser(trx, row.user_id);
    await trx('user_invitations')
      .where({ user_invitation_id: row.user_invitation_id })
      .update({ used_at: sqlInstant(deps.clock.now()) });
    await trx('users')
      .where({ user_id: row.user_id })
      .update({ password_hash: passwordHash, state: 'active', epoch: trx.raw('epoch + 1') });
    await recordAudit(trx, deps, {
      actor: SYSTEM,
      action: 'user.password_set',
      subjectType: 'user',
      subjectId: row.user_id,
    });
    return { email: user.email };
  });
}

/** Makes a secret of a purpose that lives `lifeMs`, stored as its digest, and gives the address that holds it. */
export async function issueToken(
  trx: Trx,
  deps: Deps,
  userId: number,
  purpose: 'invitation' | 'reset',
  lifeMs: number,
): Promise<string> {
  const token = randomBytes(32).toString('base64url');
  await trx('user_invitations').insert({
    user_id: userId,
    purpose,
    token_hash: tokenDigest(token),
    expires_at: sqlInstant(addMs(deps.clock.now(), lifeMs)),
    created_at: sqlInstant(deps.clock.now()),
  });
  return `${deps.config.publicUrl}/set-password#${token}`;
}

function tokenDigest(token: string): Buffer {
  return createHash('sha256').update(token).digest();
}

async function lockUser(trx: Trx, userId: number): Promise<UserRow> {
  await rawRows(trx, 'SELECT user_id FROM users WHERE user_id = ? FOR UPDATE', [userId]);
  const user = await userById(trx, userId);
  if (!user || user.state === 'left') throw notFound('person');
  return user;
}

async function mustExist(trx: Trx, userId: number): Promise<UserRow> {
  const user = await userById(trx, userId);
  if (!user) throw notFound('person');
  return user;
}

function mustBeOther(user: UserRow, actor: StaffActor): void {
  if (user.userId === actor.userId)
    throw refused('own_rights', 'Another manager changes your own rights. Nothing was changed.');
}

async function mustLeaveAManager(trx: Trx, userId: number): Promise<void> {
  const [row] = await rawRows<{ n: number }>(
    trx,
    `SELECT COUNT(*) AS n FROM users u JOIN user_roles r ON r.user_id = u.user_id AND r.role = 'manager'
     WHERE u.state = 'active' AND u.user_id <> ? LOCK IN SHARE MODE`,
    [userId],
  );
  if ((row?.n ?? 0) === 0) throw refused('last_manager', 'One manager must stay. Nothing was changed.');
}
