export { checkRequestOrigin, sessionLayer, staffOfRequest } from './identity.ts';
export type { PeopleMails } from './manage-users.ts';
export { type FirstClinic, openFirstClinic } from './open-clinic.ts';
export { type PasswordHashing, passwordHashing } from './password.ts';
export { pruneSessions } from './session-store.ts';
export { SIGN_IN_LIMITS, type SignInLimits } from './sign-in.ts';
export { userByEmail, userById } from './user-repository.ts';
export { type PeopleParts, usersRoutes } from './users-routes.ts';
