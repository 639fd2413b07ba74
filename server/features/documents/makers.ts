import type { PeopleMails } from '#server/features/users/index';
import type { DocumentMakers } from './document-for.ts';

export function documentMakers(): DocumentMakers {
  return {};
}

export const peopleMails: PeopleMails = {
  invitation: ({ name, invitedBy, url }) => ({ subject: 'Your sign-in at the clinic', text: `${name}, ${invitedBy} invites you: ${url}`, html: '' }),
  reset: ({ name, url }) => ({ subject: 'A new password', text: `${name}, set a new password: ${url}`, html: '' }),
};
