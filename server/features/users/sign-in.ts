import type { Request } from 'express';
import passport from 'passport';
import { Strategy } from 'passport-local';
import type { SessionView } from '#contract/session';
import { recordAudit } from '#server/features/audit/index';
import { todayAt } from '#server/features/business-days/index';
import type { StaffActor } from '#server/platform/actor';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { Problem } from '#server/platform/problem';
import { countTry, forgetTries, type RateRule, triesSoFar } from '#server/platform/rate-counters';
import { inTransaction } from '#server/platform/transaction';
import { beginSession } from './identity.ts';
import type { PasswordHashing } from './password.ts';
import { allUsers, type UserRow, userByEmail, userById } from './user-repository.ts';

/** Wrong passwords an account takes before it rests, and tries an address has; both hold across processes. */
export interface SignInLimits {
  readonly perAccount: RateRule;
  readonly perAddress: RateRule;
}

export const SIGN_IN_LIMITS: SignInLimits = {
  perAccount: { name: 'sign-in-account', limit: 8, windowMs: 15 * 60 * 1000 },
  perAddress: { name: 'sign-in-address', limit: 100, windowMs: 15 * 60 * 1000 },
};

/** A passport of our own, so that two applications in one process (tests) do not share strategies. */
export function createSignIn(deps: Deps, hashing: PasswordHashing, limits: SignInLimits = SIGN_IN_LIMITS) {
  const gate = new passport.Passport();
  gate.use(
    new Strategy(
      { usernameField: 'email', passwordField: 'password', session: false },
      (email, password, done) => {
        checkPassword(deps, hashing, email.trim().toLowerCase(), password).then(
          (user) => done(null, user ?? false),
          done,
        );
      },
    ),
  );

  /** Signs in or throws: sign_in_failed says nothing of whether the account exists; too_many_requests says when to come back. */
  return async function signIn(req: Request, email: string): Promise<UserRow> {
    const address = await countTry(deps.db, deps.clock, limits.perAddress, req.ip ?? 'unknown');
    const account = await triesSoFar(deps.db, deps.clock, limits.perAccount, email);
    if (!address.allowed || !account.allowed) {
      const retryAfter = Math.max(
        address.allowed ? 0 : address.retryAfter,
        account.allowed ? 0 : account.retryAfter,
      );
      throw new Problem('too_many_requests', {
        reason: account.allowed ? 'address_limited' : 'account_resting',
        detail: `Too many tries. Please wait ${Math.ceil(retryAfter / 60)} minutes, or set a new password by mail.`,
        retryAfter,
      });
    }
    const user = await authenticate(gate, req);
    if (!user) {
      await countTry(deps.db, deps.clock, limits.perAccount, email);
      throw new Problem('sign_in_failed', {
        detail:
          'E-mail or password is wrong. After eight wrong tries the account rests for a quarter of an hour.',
      });
    }
    await forgetTries(deps.db, limits.perAccount, email);
    await beginSession(req, user.userId, user.epoch);
    await inTransaction(deps.db, (trx) =>
      recordAudit(trx, deps, {
        actor: {
          kind: 'staff',
          userId: user.userId,
          name: user.name,
          roles: user.roles,
          siteIds: user.siteIds,
          from: req.ip ?? 'unknown',
        },
        action: 'session.begun',
        subjectType: 'user',
        subjectId: user.userId,
      }),
    );
    return user;
  };
}

async function checkPassword(
  deps: Deps,
  hashing: PasswordHashing,
  email: string,
  password: string,
): Promise<UserRow | undefined> {
  const user = await userByEmail(deps.db, email);
  const active = user?.state === 'active' ? user : undefined;
  const right = await hashing.matches(active?.passwordHash ?? null, password);
  return right ? active : undefined;
}

function authenticate(gate: passport.Authenticator, req: Request): Promise<UserRow | undefined> {
  return new Promise((resolve, reject) => {
    const answer = (error: unknown, user: UserRow | false | null | undefined): void => {
      if (error) reject(error);
      else resolve(user || undefined);
    };
    const handler = gate.authenticate('local', { session: false }, answer) as (
      req: Request,
      res: unknown,
      next: (error?: unknown) => void,
    ) => void;
    handler(req, {}, (error) => (error ? reject(error) : resolve(undefined)));
  });
}

/** The session as the browser sees it, with the sites' open business days. */
export async function sessionView(
  deps: Deps,
  actor: StaffActor | undefined,
  csrfToken: string | undefined,
): Promise<SessionView> {
  if (!actor) return { person: null, sites: [], csrfToken: null, demo: await demoSignIns(deps) };
  const user = await userById(deps.db, actor.userId);
  const rows = await rawRows<{ site_id: number; code: string; name: string; zone: string }>(
    deps.db,
    `SELECT s.site_id, s.code, s.name, s.zone FROM sites s JOIN user_sites u ON u.site_id = s.site_id WHERE u.user_id = ? ORDER BY s.site_id`,
    [actor.userId],
  );
  const sites = [];
  for (const row of rows) {
    sites.push({
      siteId: row.site_id,
      code: row.code,
      name: row.name,
      zone: row.zone,
      businessDay: await todayAt(deps.db, deps, row.site_id),
    });
  }
  return {
    person: { userId: actor.userId, name: actor.name, email: user?.email ?? '', roles: [...actor.roles] },
    sites,
    csrfToken: csrfToken ?? null,
    demo: null,
  };
}

async function demoSignIns(deps: Deps): Promise<SessionView['demo']> {
  const password = deps.config.demoPassword;
  if (password === undefined) return null;
  const people = (await allUsers(deps.db)).filter(
    (user) => user.state === 'active' && user.email.endsWith('@tenderlight.example'),
  );
  if (people.length === 0) return null;
  return { password, people: people.map(({ email, name, roles }) => ({ email, name, roles: [...roles] })) };
}
