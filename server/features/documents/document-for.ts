import { createHash } from 'node:crypto';
import { rawRows, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import type { DocumentKind } from '#server/platform/outbox';
import { notFound } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';

/** A document fresh from its renderer. */
export interface MadeDocument {
  readonly filename: string;
  readonly siteId: number;
  readonly subjectType: string;
  readonly bytes: Buffer;
}

/** Renders a document from stored rows; the same rows give the same bytes. */
export type DocumentMaker = (deps: Deps, id: number) => Promise<MadeDocument>;

/** Makers by kind, as the composition root wired them. */
export type DocumentMakers = Readonly<Partial<Record<DocumentKind, DocumentMaker>>>;

export interface StoredDocument {
  readonly filename: string;
  readonly siteId: number;
  readonly bytes: Buffer;
}

/**
 * The document of a kind for a subject: rendered once, stored, and from then on the stored bytes.
 * @throws Problem not_found when there is no such subject
 */
export async function documentFor(
  deps: Deps,
  makers: DocumentMakers,
  kind: DocumentKind,
  id: number,
): Promise<StoredDocument> {
  const [stored] = await rawRows<{ filename: string; site_id: number; bytes: Buffer }>(
    deps.db,
    'SELECT filename, site_id, bytes FROM documents WHERE kind = ? AND subject_id = ? ORDER BY document_id LIMIT 1',
    [kind, id],
  );
  if (stored) return { filename: stored.filename, siteId: stored.site_id, bytes: stored.bytes };
  const maker = makers[kind];
  if (!maker) throw notFound('document');
  const made = await maker(deps, id);
  await inTransaction(deps.db, (trx) =>
    trx('documents').insert({
      kind,
      subject_type: made.subjectType,
      subject_id: id,
      site_id: made.siteId,
      filename: made.filename,
      media_type: 'application/pdf',
      sha256: createHash('sha256').update(made.bytes).digest(),
      bytes: made.bytes,
      created_at: sqlInstant(deps.clock.now()),
    }),
  );
  return made;
}
