import type { QuoteContent, QuoteDraft, QuoteState } from '#domain/quotes/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { type Db, rawRows, type Trx } from '#server/platform/db';

export interface QuoteRow {
  readonly quoteId: number;
  readonly siteId: number;
  readonly patientId: number;
  readonly number: string;
  /** As stored; by its date alone an issued quote may have lapsed (see stateOn). */
  readonly state: QuoteState;
  readonly draft: QuoteDraft | null;
  readonly draftVersion: number;
  readonly counsellorUserId: number;
  readonly createdAt: Instant;
  readonly changedAt: Instant;
  readonly nextContactOn: ClinicDate | null;
  readonly withdrawnReason: string | null;
}

export interface VersionRow {
  readonly quoteVersionId: number;
  readonly quoteId: number;
  readonly versionNo: number;
  readonly priceBookId: number;
  readonly priceBookVersion: number;
  readonly content: QuoteContent;
  readonly contentHash: string;
  readonly issuedBy: string;
  readonly issuedAt: Instant;
  readonly issuedOn: ClinicDate;
  readonly validUntil: ClinicDate;
}

async function quoteWhere(trx: Db | Trx, where: string, quoteId: number): Promise<QuoteRow | undefined> {
  const [row] = await rawRows<{
    quote_id: number;
    site_id: number;
    patient_id: number;
    number: string;
    state: QuoteState;
    draft: string | null;
    draft_version: number;
    counsellor_user_id: number;
    created_at: Instant;
    changed_at: Instant;
    next_contact_on: ClinicDate | null;
    withdrawn_reason: string | null;
  }>(trx, `SELECT * FROM quotes WHERE ${where}`, [quoteId]);
  return row
    ? {
        quoteId: row.quote_id,
        siteId: row.site_id,
        patientId: row.patient_id,
        number: row.number,
        state: row.state,
        draft: row.draft === null ? null : (JSON.parse(row.draft) as QuoteDraft),
        draftVersion: row.draft_version,
        counsellorUserId: row.counsellor_user_id,
        createdAt: row.created_at,
        changedAt: row.changed_at,
        nextContactOn: row.next_contact_on,
        withdrawnReason: row.withdrawn_reason,
      }
    : undefined;
}

export async function quoteOf(trx: Db | Trx, quoteId: number): Promise<QuoteRow | undefined> {
  return await quoteWhere(trx, 'quote_id = ?', quoteId);
}

/** A quote locked until the end of the transaction: every step of its life begins here. */
export async function lockQuote(trx: Trx, quoteId: number): Promise<QuoteRow | undefined> {
  return await quoteWhere(trx, 'quote_id = ? FOR UPDATE', quoteId);
}

/** The issued versions, newest first. */
export async function versionsOf(trx: Db | Trx, quoteId: number): Promise<VersionRow[]> {
  const rows = await rawRows<{
    quote_version_id: number;
    quote_id: number;
    version_no: number;
    price_book_id: number;
    book_version: number;
    content: string;
    content_hash: string;
    name: string;
    issued_at: Instant;
    issued_on: ClinicDate;
    valid_until: ClinicDate;
  }>(
    trx,
    `SELECT v.quote_version_id, v.quote_id, v.version_no, v.price_book_id, b.version_no AS book_version, v.content,
            v.content_hash, u.name, v.issued_at, v.issued_on, v.valid_until
     FROM quote_versions v JOIN price_books b ON b.price_book_id = v.price_book_id JOIN users u ON u.user_id = v.issued_by
     WHERE v.quote_id = ? ORDER BY v.version_no DESC`,
    [quoteId],
  );
  return rows.map((row) => ({
    quoteVersionId: row.quote_version_id,
    quoteId: row.quote_id,
    versionNo: row.version_no,
    priceBookId: row.price_book_id,
    priceBookVersion: row.book_version,
    content: JSON.parse(row.content) as QuoteContent,
    contentHash: row.content_hash,
    issuedBy: row.name,
    issuedAt: row.issued_at,
    issuedOn: row.issued_on,
    validUntil: row.valid_until,
  }));
}

export async function newestVersion(trx: Db | Trx, quoteId: number): Promise<VersionRow | undefined> {
  return (await versionsOf(trx, quoteId))[0];
}
