import { randomBytes, timingSafeEqual } from 'node:crypto';
import type { Request, RequestHandler } from 'express';
import session from 'express-session';
import type { Actor, StaffActor } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { Problem } from '#server/platform/problem';
import { SESSION_MS, SessionStore } from './session-store.ts';
import { userById } from './user-repository.ts';

declare module 'express-session' {
  interface SessionData {
    userId: number;
    /** The person's epoch at sign-in: a change of rights raises theirs and this session is over. */
    epoch: number;
    csrfToken: string;
  }
}

export const SESSION_COOKIE = 'tl.sid';

/** The session layer: a hashed id in MariaDB, a strict cookie, nothing kept for those who never sign in. */
export function sessionLayer(deps: Pick<Deps, 'db' | 'clock' | 'config'>): RequestHandler {
  return session({
    name: SESSION_COOKIE,
    secret: deps.config.sessionSecret,
    store: new SessionStore(deps.db, deps.clock),
    resave: false,
    saveUninitialized: false,
    rolling: false,
    proxy: deps.config.trustProxy > 0,
    cookie: { httpOnly: true, sameSite: 'lax', secure: deps.config.secure, maxAge: SESSION_MS, path: '/' },
  });
}

/** The person behind a request's session; undefined for nobody, for those who left, and after a change of rights. */
export async function staffOfRequest(deps: Pick<Deps, 'db'>, req: Request): Promise<StaffActor | undefined> {
  const { userId, epoch } = req.session ?? {};
  if (userId === undefined) return undefined;
  const user = await userById(deps.db, userId);
  if (user?.state !== 'active' || user.epoch !== epoch) return undefined;
  return {
    kind: 'staff',
    userId,
    name: user.name,
    roles: user.roles,
    siteIds: user.siteIds,
    from: req.ip ?? 'unknown',
  };
}

/**
 * Refuses writing requests that another site's page could have sent: staff prove it with their session's token, patients and
 * those who sign in by where the browser says the request comes from.
 */
export function checkRequestOrigin(deps: Pick<Deps, 'config'>, req: Request, actor: Actor | undefined): void {
  if (actor?.kind === 'staff' && !(req.method === 'POST' && req.path === '/api/session')) {
    const expected = req.session.csrfToken ?? '';
    if (!sameText(expected, req.header('x-csrf-token') ?? '')) {
      throw new Problem('csrf_failed', {
        detail: 'This page is out of date. Reload it and try again; nothing was changed.',
      });
    }
    return;
  }
  const origin = req.header('origin');
  const site = req.header('sec-fetch-site');
  const foreign =
    (site !== undefined && site !== 'same-origin' && site !== 'none') ||
    (origin !== undefined && !ownOrigin(deps, req, origin));
  if (foreign)
    throw new Problem('csrf_failed', { detail: 'This request came from another site and was refused.' });
}

function ownOrigin(deps: Pick<Deps, 'config'>, req: Request, origin: string): boolean {
  return origin === deps.config.publicUrl || origin === `${req.protocol}://${req.header('host')}`;
}

function sameText(a: string, b: string): boolean {
  const left = Buffer.from(a);
  const right = Buffer.from(b);
  return a !== '' && left.length === right.length && timingSafeEqual(left, right);
}

/** Begins a session anew for a person who has just signed in: another id, another token (no fixation). */
export async function beginSession(req: Request, userId: number, epoch: number): Promise<void> {
  await new Promise<void>((resolve, reject) => {
    req.session.regenerate((error: unknown) => (error ? reject(error) : resolve()));
  });
  req.session.userId = userId;
  req.session.epoch = epoch;
  req.session.csrfToken = randomBytes(24).toString('base64url');
  await new Promise<void>((resolve, reject) => {
    req.session.save((error: unknown) => (error ? reject(error) : resolve()));
  });
}

/** Ends a session, here and in the database. */
export async function endSession(req: Request): Promise<void> {
  await new Promise<void>((resolve, reject) => {
    req.session.destroy((error: unknown) => (error ? reject(error) : resolve()));
  });
}
