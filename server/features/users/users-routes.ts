import { getSession, signIn as signInContract, signOut } from '#contract/session';
import { askPasswordReset, changeUser, inviteUser, leaveUser, listUsers, setPassword } from '#contract/users';
import { type BoundRoute, route } from '#server/http/route';
import type { StaffActor } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { Problem } from '#server/platform/problem';
import { countTry, type RateRule } from '#server/platform/rate-counters';
import { endSession, staffOfRequest } from './identity.ts';
import {
  askForReset,
  changeRights,
  endAccess,
  inviteToClinic,
  type PeopleMails,
  setPasswordByToken,
} from './manage-users.ts';
import type { PasswordHashing } from './password.ts';
import { createSignIn, type SignInLimits, sessionView } from './sign-in.ts';
import { allUsers, userView } from './user-repository.ts';

const SECRET_TRIES: RateRule = { name: 'secret', limit: 30, windowMs: 15 * 60 * 1000 };

export interface PeopleParts {
  readonly hashing: PasswordHashing;
  readonly mails: PeopleMails;
  readonly limits?: SignInLimits;
}

/** Sessions and the people of the clinic. */
export function usersRoutes(deps: Deps, { hashing, mails, limits }: PeopleParts): BoundRoute[] {
  const signIn = createSignIn(deps, hashing, limits);
  return [
    route(signInContract, async ({ body, raw }) => {
      await signIn(raw.req, body.email);
      return await sessionView(deps, await staffOfRequest(deps, raw.req), raw.req.session.csrfToken);
    }),
    route(
      getSession,
      async ({ actor, raw }) => await sessionView(deps, staffOnly(actor), raw.req.session?.csrfToken),
    ),
    route(signOut, async ({ raw }) => {
      await endSession(raw.req);
      raw.res.clearCookie('tl.sid', { path: '/' });
      return undefined;
    }),
    route(listUsers, async () => ({ users: (await allUsers(deps.db)).map(userView) })),
    route(inviteUser, async ({ body, actor }) => userView(await inviteToClinic(deps, mails, body, actor))),
    route(changeUser, async ({ params, body, actor }) =>
      userView(await changeRights(deps, params.userId, body, body.version, actor)),
    ),
    route(leaveUser, async ({ params, actor }) => userView(await endAccess(deps, params.userId, actor))),
    route(askPasswordReset, async ({ body, raw }) => {
      await limit(deps, raw.req.ip);
      await askForReset(deps, mails, body.email);
      return { sent: true as const };
    }),
    route(setPassword, async ({ body, raw }) => {
      await limit(deps, raw.req.ip);
      return await setPasswordByToken(deps, hashing, body.token, body.password);
    }),
  ];
}

function staffOnly(actor: { readonly kind: string } | undefined): StaffActor | undefined {
  return actor?.kind === 'staff' ? (actor as StaffActor) : undefined;
}

async function limit(deps: Deps, address: string | undefined): Promise<void> {
  const answer = await countTry(deps.db, deps.clock, SECRET_TRIES, address ?? 'unknown');
  if (!answer.allowed)
    throw new Problem('too_many_requests', {
      detail: 'Too many tries from here. Please wait a while.',
      retryAfter: answer.retryAfter,
    });
}
