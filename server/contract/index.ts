import * as approvals from './approvals.ts';
import * as audit from './audit.ts';
import * as bank from './bank.ts';
import * as catalogue from './catalogue.ts';
import * as closing from './closing.ts';
import * as courses from './courses.ts';
import type { Contract } from './define.ts';
import * as delivery from './delivery.ts';
import * as documents from './documents.ts';
import * as fees from './fees.ts';
import * as ledger from './ledger.ts';
import * as operations from './operations.ts';
import * as patients from './patients.ts';
import * as payments from './payments.ts';
import * as portal from './portal.ts';
import * as proof from './proof.ts';
import * as quotes from './quotes.ts';
import * as session from './session.ts';
import * as settings from './settings.ts';
import * as tills from './tills.ts';
import * as today from './today.ts';
import * as users from './users.ts';

/** One file per feature; the registry that binds, documents and tests every operation. */
const FILES: readonly Readonly<Record<string, unknown>>[] = [
  operations,
  session,
  users,
  settings,
  approvals,
  audit,
  patients,
  catalogue,
  quotes,
  courses,
  payments,
  delivery,
  fees,
  tills,
  closing,
  bank,
  ledger,
  documents,
  today,
  proof,
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
