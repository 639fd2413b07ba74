import type { Role } from '#contract/define';

export interface Tab {
  readonly path: string;
  readonly words: string;
  readonly roles: readonly Role[];
}

/** The index tabs of the book, in order; each person sees those their roles may open. */
export const TABS: readonly Tab[] = [
  { path: '/', words: 'Today', roles: ['counsellor', 'front_desk', 'surgeon', 'manager', 'auditor'] },
  {
    path: '/patients',
    words: 'Patients',
    roles: ['counsellor', 'front_desk', 'surgeon', 'manager', 'auditor'],
  },
  { path: '/quotes', words: 'Quotes', roles: ['counsellor', 'front_desk', 'manager', 'auditor'] },
  { path: '/takings', words: 'Takings', roles: ['front_desk', 'manager', 'auditor'] },
  { path: '/bank', words: 'Bank', roles: ['front_desk', 'manager', 'auditor'] },
  { path: '/fees', words: 'Fees', roles: ['surgeon', 'manager', 'auditor'] },
  { path: '/price-book', words: 'Price book', roles: ['counsellor', 'manager', 'auditor'] },
  { path: '/proof', words: 'Proof', roles: ['manager', 'auditor'] },
  {
    path: '/settings',
    words: 'Settings',
    roles: ['counsellor', 'front_desk', 'surgeon', 'manager', 'auditor'],
  },
];

const ROLE_WORDS: Readonly<Record<Role, string>> = {
  counsellor: 'counsellor',
  front_desk: 'front desk',
  surgeon: 'surgeon',
  manager: 'manager',
  auditor: 'auditor',
};

/** Roles as people say them: "front desk and manager". */
export function roleWords(roles: readonly Role[]): string {
  return roles.map((role) => ROLE_WORDS[role]).join(' and ');
}
