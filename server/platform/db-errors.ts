/**
 * MariaDB errors by number: the texts and code names are not to be relied on (4025 arrives under a misleading name).
 * Source: MariaDB error code reference.
 */
const ERRNO = {
  duplicate: 1062,
  lockWait: 1205,
  deadlock: 1213,
  missingParent: 1452,
  check: 4025,
  denied: 1142,
} as const;

function errnoOf(error: unknown): number | undefined {
  return typeof error === 'object' && error !== null && 'errno' in error && typeof error.errno === 'number'
    ? error.errno
    : undefined;
}

/** True when the same transaction may simply be tried again. */
export function isRetryable(error: unknown): boolean {
  const errno = errnoOf(error);
  return errno === ERRNO.deadlock || errno === ERRNO.lockWait;
}

/** True for a unique key that was already there; with `key`, only for that key's name. */
export function isDuplicate(error: unknown, key?: string): boolean {
  if (errnoOf(error) !== ERRNO.duplicate) return false;
  return key === undefined || (error instanceof Error && error.message.includes(key));
}

/** True when a CHECK of the schema refused the row. */
export function isCheckFailure(error: unknown): boolean {
  return errnoOf(error) === ERRNO.check;
}

/** True when the row pointed to does not exist. */
export function isMissingParent(error: unknown): boolean {
  return errnoOf(error) === ERRNO.missingParent;
}

/** True when the user may not do this to this table. */
export function isDenied(error: unknown): boolean {
  return errnoOf(error) === ERRNO.denied;
}
