/**
 * What the application's database user may do with each table; the last step of every migration grants exactly this.
 * - append: history. INSERT and SELECT, nothing else; triggers refuse UPDATE and DELETE even to others.
 * - update: rows live and change, but are never deleted.
 * - work: rows come and go (sessions, counters, hints).
 * - read: only the owner writes (migrations, seeds' marker).
 */
export type TableUse = 'append' | 'update' | 'work' | 'read';

export const TABLE_USES: Readonly<Record<string, TableUse>> = {
  clinics: 'update',
  clinic_settings: 'append',
  sites: 'update',
  users: 'update',
  user_roles: 'work',
  user_sites: 'work',
  user_invitations: 'update',
  sessions: 'work',
  rate_counters: 'work',
  audit_rows: 'append',
  audit_values: 'update',
  audit_seals: 'append',
  approvals: 'update',
  documents: 'append',
  outbox_mails: 'update',
  live_hints: 'work',
  business_days: 'update',
  number_series: 'update',
  journal_entries: 'append',
  journal_lines: 'append',
  patients: 'update',
  prescriptions: 'append',
  approved_plans: 'append',
  price_books: 'update',
  quotes: 'update',
  quote_versions: 'append',
  quote_links: 'update',
  quote_acceptances: 'append',
  courses: 'append',
  course_eyes: 'update',
  course_dues: 'append',
  obligations: 'append',
  recognitions: 'append',
  tills: 'update',
  till_sessions: 'update',
  till_movements: 'append',
  checkout_attempts: 'update',
  stripe_events: 'update',
  receipts: 'append',
  receipt_tenders: 'append',
  receipt_voids: 'append',
  balance_transactions: 'update',
  payouts: 'update',
  terminal_batches: 'append',
  day_closes: 'append',
  fee_agreements: 'append',
  fee_lines: 'append',
  seed_markers: 'read',
};

const PRIVILEGES: Readonly<Record<TableUse, readonly string[]>> = {
  append: ['SELECT', 'INSERT'],
  update: ['SELECT', 'INSERT', 'UPDATE'],
  work: ['SELECT', 'INSERT', 'UPDATE', 'DELETE'],
  read: ['SELECT'],
};

/** The privileges a kind of use stands for. */
export function privilegesOf(use: TableUse): readonly string[] {
  return PRIVILEGES[use];
}

/** Names of the tables whose rows never change. */
export function appendOnlyTables(): string[] {
  return Object.keys(TABLE_USES).filter((table) => TABLE_USES[table] === 'append');
}
