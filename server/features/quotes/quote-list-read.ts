import type { CourseMark } from '#contract/patients';
import type { QuoteSummary } from '#contract/quotes';
import { EYES } from '#domain/eye';
import { type CurrencyCode, minor } from '#domain/money/index';
import { type QuoteState, stateOn } from '#domain/quotes/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { todayAt } from '#server/features/business-days/index';
import { courseMarks } from '#server/features/patients/index';
import type { StaffActor } from '#server/platform/actor';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';

const LISTED = 200;

export interface QuoteFilter {
  readonly state: QuoteState | undefined;
  readonly counsellor: number | undefined;
  readonly patient: number | undefined;
  readonly siteId: number | undefined;
  readonly q: string | undefined;
  readonly contactBy: ClinicDate | undefined;
}

interface ListRow {
  quote_id: number;
  number: string;
  site_id: number;
  state: QuoteState;
  patient_id: number;
  given_name: string;
  family_name: string;
  counsellor_user_id: number;
  counsellor: string;
  changed_at: Instant;
  next_contact_on: ClinicDate | null;
  version_no: number | null;
  issued_on: ClinicDate | null;
  valid_until: ClinicDate | null;
  currency: CurrencyCode | null;
  totals: string | null;
  od: string | null;
  os: string | null;
  course_id: number | null;
  opened_at: Instant | null;
}

const SELECT = `SELECT q.quote_id, q.number, q.site_id, q.state, q.patient_id, p.given_name, p.family_name,
    q.counsellor_user_id, u.name AS counsellor, q.changed_at, q.next_contact_on, v.version_no, v.issued_on, v.valid_until,
    JSON_VALUE(v.content, '$.options[0].priced.currency') AS currency,
    JSON_EXTRACT(v.content, '$.options[*].priced.totalMinor') AS totals,
    IF(v.content IS NULL, JSON_VALUE(q.draft, '$.options[0].procedures.OD'),
       JSON_VALUE(v.content, '$.options[0].input.eyes.OD.procedureId')) AS od,
    IF(v.content IS NULL, JSON_VALUE(q.draft, '$.options[0].procedures.OS'),
       JSON_VALUE(v.content, '$.options[0].input.eyes.OS.procedureId')) AS os,
    (SELECT c.course_id FROM courses c WHERE c.quote_id = q.quote_id) AS course_id,
    (SELECT MAX(l.last_opened_at) FROM quote_links l WHERE l.quote_id = q.quote_id) AS opened_at
  FROM quotes q
  JOIN patients p ON p.patient_id = q.patient_id
  JOIN users u ON u.user_id = q.counsellor_user_id
  LEFT JOIN quote_versions v ON v.quote_id = q.quote_id AND v.version_no =
    (SELECT MAX(n.version_no) FROM quote_versions n WHERE n.quote_id = q.quote_id)`;

/** Quotes of the actor's sites, the last changed first. */
export async function readQuotes(
  deps: Pick<Deps, 'db' | 'clock'>,
  filter: QuoteFilter,
  actor: StaffActor,
): Promise<{ quotes: QuoteSummary[]; more: boolean; counsellors: { userId: number; name: string }[] }> {
  const siteIds = actor.siteIds.filter((id) => filter.siteId === undefined || id === filter.siteId);
  if (siteIds.length === 0) return { quotes: [], more: false, counsellors: [] };
  const todays = new Map<number, ClinicDate>();
  for (const siteId of siteIds) todays.set(siteId, await todayAt(deps.db, deps, siteId));
  const { where, bindings } = conditions(filter, siteIds, todays);
  const rows = await rawRows<ListRow>(
    deps.db,
    `${SELECT} WHERE ${where} ORDER BY q.changed_at DESC, q.quote_id DESC LIMIT ${LISTED + 1}`,
    bindings,
  );
  const listed = rows.slice(0, LISTED);
  const marks = await courseMarks(
    deps.db,
    listed.filter((row) => row.course_id !== null).map((row) => row.patient_id),
  );
  return {
    quotes: listed.map((row) => summary(row, todays, marks.get(row.patient_id) ?? [])),
    more: rows.length > LISTED,
    counsellors: await counsellorsOf(deps, siteIds),
  };
}

function conditions(
  filter: QuoteFilter,
  siteIds: readonly number[],
  todays: ReadonlyMap<number, ClinicDate>,
): { where: string; bindings: (string | number)[] } {
  const where = [`q.site_id IN (${siteIds.map(() => '?').join(', ')})`];
  const bindings: (string | number)[] = [...siteIds];
  const add = (condition: string, ...values: (string | number)[]) => {
    where.push(condition);
    bindings.push(...values);
  };
  if (filter.counsellor !== undefined) add('q.counsellor_user_id = ?', filter.counsellor);
  if (filter.patient !== undefined) add('q.patient_id = ?', filter.patient);
  if (filter.contactBy !== undefined) add('q.next_contact_on <= ?', filter.contactBy);
  for (const word of (filter.q ?? '').split(/\s+/).filter((part) => part !== '')) {
    const start = `${word.replace(/[\\%_]/g, (character) => `\\${character}`)}%`;
    add('(q.number LIKE ? OR p.family_name LIKE ? OR p.given_name LIKE ?)', start, start, start);
  }
  if (filter.state === 'issued' || filter.state === 'lapsed') {
    const overdue = `v.valid_until < CASE q.site_id ${siteIds.map(() => 'WHEN ? THEN ?').join(' ')} END`;
    const days = siteIds.flatMap((siteId) => [siteId, todays.get(siteId) ?? '']);
    if (filter.state === 'issued') add(`q.state = 'issued' AND NOT ${overdue}`, ...days);
    else add(`(q.state = 'lapsed' OR (q.state = 'issued' AND ${overdue}))`, ...days);
  } else if (filter.state !== undefined) add('q.state = ?', filter.state);
  return { where: where.join(' AND '), bindings };
}

function summary(
  row: ListRow,
  todays: ReadonlyMap<number, ClinicDate>,
  marks: readonly CourseMark[],
): QuoteSummary {
  const today = todays.get(row.site_id);
  return {
    quoteId: row.quote_id,
    number: row.number,
    siteId: row.site_id,
    state: today ? stateOn(row.state, row.valid_until, today) : row.state,
    patient: { patientId: row.patient_id, name: `${row.given_name} ${row.family_name}` },
    counsellor: { userId: row.counsellor_user_id, name: row.counsellor },
    changedAt: row.changed_at,
    nextContactOn: row.next_contact_on,
    versionNo: row.version_no,
    issuedOn: row.issued_on,
    validUntil: row.valid_until,
    currency: row.currency,
    totalsMinor: row.totals === null ? [] : (JSON.parse(row.totals) as number[]).map(minor),
    eyes: marks.find((mark) => mark.courseId === row.course_id)?.eyes ?? quotedEyes(row),
    openedAt: row.opened_at,
  };
}

function quotedEyes(row: ListRow): QuoteSummary['eyes'] {
  return EYES.filter((eye) => (eye === 'OD' ? row.od : row.os) !== null).map((eye) => ({
    eye,
    state: 'planned',
    money: 'none',
  }));
}

async function counsellorsOf(
  deps: Pick<Deps, 'db'>,
  siteIds: readonly number[],
): Promise<{ userId: number; name: string }[]> {
  const rows = await rawRows<{ user_id: number; name: string }>(
    deps.db,
    `SELECT DISTINCT u.user_id, u.name FROM quotes q JOIN users u ON u.user_id = q.counsellor_user_id
     WHERE q.site_id IN (${siteIds.map(() => '?').join(', ')}) ORDER BY u.name`,
    siteIds,
  );
  return rows.map((row) => ({ userId: row.user_id, name: row.name }));
}
