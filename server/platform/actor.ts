import type { Role } from '#contract/define';
import { notFound, Problem } from './problem.ts';

/** Someone of the clinic who is signed in. */
export interface StaffActor {
  readonly kind: 'staff';
  readonly userId: number;
  readonly name: string;
  readonly roles: readonly Role[];
  /** Sites the person works at; every read and write is bounded by them (invariant 20). */
  readonly siteIds: readonly number[];
  /** Address the request came from, for the audit trail. */
  readonly from: string;
}

/** The holder of a patient's link, after it was exchanged for a cookie. */
export interface PatientActor {
  readonly kind: 'patient';
  readonly quoteLinkId: number;
  readonly quoteId: number;
  readonly siteId: number;
  readonly from: string;
}

/** The house itself: workers, imports, seeds. */
export interface SystemActor {
  readonly kind: 'system';
  readonly from: string;
}

export type Actor = StaffActor | PatientActor | SystemActor;

export const SYSTEM: SystemActor = { kind: 'system', from: 'house' };

/** True when the person holds any of the roles. */
export function hasRole(actor: StaffActor, ...roles: readonly Role[]): boolean {
  return roles.some((role) => actor.roles.includes(role));
}

/** Lets only people of a site go on; to others the thing does not exist. */
export function mustWorkAt(actor: StaffActor, siteId: number, what: string): void {
  if (!actor.siteIds.includes(siteId)) throw notFound(what);
}

/** Lets only one of the roles go on. */
export function mustBe(actor: StaffActor, ...roles: readonly Role[]): void {
  if (!hasRole(actor, ...roles)) {
    throw new Problem('forbidden', { detail: `Only ${roles.join(' or ').replace('_', ' ')} may do this.` });
  }
}

/** The user behind an actor, null for patients and the house. */
export function userIdOf(actor: Actor): number | null {
  return actor.kind === 'staff' ? actor.userId : null;
}
