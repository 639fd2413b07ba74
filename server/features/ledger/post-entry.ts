import type { Eye } from '#domain/eye';
import { checkEntry, type EntryDraft } from '#domain/ledger/index';
import type { CurrencyCode } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { lockOpenDay } from '#server/features/business-days/index';
import { type Actor, userIdOf } from '#server/platform/actor';
import { insertRow, rawRows, readMinor, sqlInstant, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { BrokenInvariant } from '#server/platform/problem';

/** What an entry is about; the pair (source, kind) is unique, so that nothing posts twice (invariants 6 and 8). */
export interface EntrySource {
  /** Table-like name of what happened: 'receipt', 'payout', 'recognition', 'fee_line'. */
  readonly type: string;
  readonly id: number;
}

export interface PostEntryInput {
  readonly siteId: number;
  readonly source: EntrySource;
  readonly draft: EntryDraft;
  readonly actor: Actor;
  /** The open day, where the caller has locked it already. */
  readonly bookedOn?: ClinicDate;
  readonly correctsEntryId?: number;
}

export interface PostedEntry {
  readonly entryId: number;
  readonly bookedOn: ClinicDate;
}

/**
 * Posts one balanced entry to the site's open day, in the caller's transaction. The draft is checked again here: the
 * database can be told to skip its checks, this function cannot (invariants 1, 2, 3).
 * @throws BrokenInvariant when the draft is not a sound entry: rules build drafts, so this is a defect
 */
export async function postEntry(
  trx: Trx,
  deps: Pick<Deps, 'clock'>,
  input: PostEntryInput,
): Promise<PostedEntry> {
  const { draft, siteId, source } = input;
  const findings = checkEntry(draft);
  if (findings.length > 0) {
    throw new BrokenInvariant(
      `Entry ${draft.kind} for ${source.type} ${source.id}: ${JSON.stringify(findings)}`,
    );
  }
  const bookedOn = input.bookedOn ?? (await lockOpenDay(trx, deps, siteId));
  const entryId = await insertRow(trx, 'journal_entries', {
    site_id: siteId,
    kind: draft.kind,
    source_type: source.type,
    source_id: source.id,
    occurred_on: draft.occurredOn,
    booked_on: bookedOn,
    recorded_at: sqlInstant(deps.clock.now()),
    currency: draft.currency,
    memo: draft.memo,
    user_id: userIdOf(input.actor),
    corrects_entry_id: input.correctsEntryId ?? null,
  });
  await trx('journal_lines').insert(
    draft.lines.map((line, index) => ({
      journal_entry_id: entryId,
      line_no: index + 1,
      site_id: siteId,
      booked_on: bookedOn,
      account_code: line.account,
      currency: draft.currency,
      amount_minor: line.amountMinor,
      course_id: line.courseId ?? null,
      eye: line.eye ?? null,
      obligation_id: line.obligationId ?? null,
      till_id: line.tillId ?? null,
      payee_id: line.payeeId ?? null,
    })),
  );
  return { entryId, bookedOn };
}

/** The entry a source was posted as, undefined when it has not been. */
export async function entryOf(trx: Trx, source: EntrySource, kind: string): Promise<number | undefined> {
  const [row] = await rawRows<{ journal_entry_id: number }>(
    trx,
    'SELECT journal_entry_id FROM journal_entries WHERE source_type = ? AND source_id = ? AND kind = ?',
    [source.type, source.id, kind],
  );
  return row?.journal_entry_id;
}

/** A posted entry with its lines as a draft has them: what a reversal starts from. */
export async function readEntry(
  trx: Trx,
  source: EntrySource,
  kind: string,
): Promise<(Pick<EntryDraft, 'currency' | 'memo' | 'lines'> & { readonly entryId: number }) | undefined> {
  const [entry] = await rawRows<{ journal_entry_id: number; currency: CurrencyCode; memo: string }>(
    trx,
    'SELECT journal_entry_id, currency, memo FROM journal_entries WHERE source_type = ? AND source_id = ? AND kind = ?',
    [source.type, source.id, kind],
  );
  if (!entry) return undefined;
  const lines = await rawRows<{
    account_code: string;
    amount_minor: number;
    course_id: number | null;
    eye: Eye | null;
    obligation_id: number | null;
    till_id: number | null;
    payee_id: number | null;
  }>(
    trx,
    `SELECT account_code, amount_minor, course_id, eye, obligation_id, till_id, payee_id FROM journal_lines
     WHERE journal_entry_id = ? ORDER BY line_no`,
    [entry.journal_entry_id],
  );
  return {
    entryId: entry.journal_entry_id,
    currency: entry.currency,
    memo: entry.memo,
    lines: lines.map((line) => ({
      account: line.account_code,
      amountMinor: readMinor(line.amount_minor),
      ...(line.course_id === null ? {} : { courseId: line.course_id }),
      ...(line.eye === null ? {} : { eye: line.eye }),
      ...(line.obligation_id === null ? {} : { obligationId: line.obligation_id }),
      ...(line.till_id === null ? {} : { tillId: line.till_id }),
      ...(line.payee_id === null ? {} : { payeeId: line.payee_id }),
    })),
  };
}
