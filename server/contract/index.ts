import * as catalogue from './catalogue.ts';
import * as courses from './courses.ts';
import type { Contract } from './define.ts';
import * as delivery from './delivery.ts';
import * as operations from './operations.ts';
import * as patients from './patients.ts';
import * as payments from './payments.ts';
import * as portal from './portal.ts';
import * as quotes from './quotes.ts';

/** One file per feature; the registry that binds, documents and tests every operation. */
const FILES: readonly Readonly<Record<string, unknown>>[] = [
  operations,
  patients,
  catalogue,
  quotes,
  courses,
  payments,
  delivery,
  portal,
];

function isContract(value: unknown): value is Contract {
  return (
    typeof value === 'object' && value !== null && 'method' in value && 'path' in value && 'access' in value
  );
}

/** Every contract of the API, in the order of the files. */
export const ALL_CONTRACTS: readonly Contract[] = FILES.flatMap((file) =>
  Object.values(file).filter(isContract),
);
