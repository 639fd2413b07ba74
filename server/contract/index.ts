import type { Contract } from './define.ts';
import * as operations from './operations.ts';

/** One file per feature; the registry that binds, documents and tests every operation. */
const FILES: readonly Readonly<Record<string, unknown>>[] = [operations];

function isContract(value: unknown): value is Contract {
  return (
    typeof value === 'object' && value !== null && 'method' in value && 'path' in value && 'access' in value
  );
}

/** Every contract of the API, in the order of the files. */
export const ALL_CONTRACTS: readonly Contract[] = FILES.flatMap((file) =>
  Object.values(file).filter(isContract),
);
