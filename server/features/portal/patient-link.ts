import { createHash } from 'node:crypto';
import type { Request } from 'express';
import type { Instant } from '#domain/time/index';
import type { PatientActor } from '#server/platform/actor';
import { rawRows, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { Problem } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';

export const LINK_COOKIE = 'tl.link';

interface LinkRow {
  quote_link_id: number;
  quote_id: number;
  site_id: number;
  expires_at: Instant;
  revoked_at: Instant | null;
}

/** The digest a link's secret is stored as. */
export function linkDigest(token: string): Buffer {
  return createHash('sha256').update(token).digest();
}

async function linkOf(deps: Pick<Deps, 'db'>, token: string): Promise<LinkRow | undefined> {
  const [row] = await rawRows<LinkRow>(
    deps.db,
    `SELECT l.quote_link_id, l.quote_id, q.site_id, l.expires_at, l.revoked_at
     FROM quote_links l JOIN quotes q ON q.quote_id = l.quote_id WHERE l.token_hash = ?`,
    [linkDigest(token)],
  );
  return row;
}

/**
 * Exchanges a link's secret: the link lives, and its opening is written down.
 * @throws Problem not_found for a secret that is none, gone for one that was revoked or has run out
 */
export async function openPatientLink(
  deps: Pick<Deps, 'db' | 'clock'>,
  token: string,
): Promise<{ expiresAt: Instant }> {
  const link = await linkOf(deps, token);
  if (!link) {
    throw new Problem('not_found', {
      detail: 'This link is not complete. Please open it from your e-mail again, or call the clinic.',
    });
  }
  const now = deps.clock.now();
  refuseDeadLink(link, now);
  await inTransaction(deps.db, (trx) =>
    trx('quote_links')
      .where({ quote_link_id: link.quote_link_id })
      .update({
        first_opened_at: trx.raw('COALESCE(first_opened_at, ?)', [sqlInstant(now)]),
        last_opened_at: sqlInstant(now),
      }),
  );
  return { expiresAt: link.expires_at };
}

function refuseDeadLink(link: LinkRow, now: Instant): void {
  if (link.revoked_at !== null) {
    throw new Problem('gone', {
      reason: 'link_revoked',
      detail: 'This link was withdrawn by the clinic. Please use the newest e-mail from us, or call us.',
    });
  }
  if (link.expires_at <= now) {
    throw new Problem('gone', {
      reason: 'link_expired',
      detail: 'This link has run out. Call the clinic and we send you a new one.',
    });
  }
}

/** The patient behind a request's cookie; undefined without one. Throws gone when the link has died meanwhile. */
export async function patientOfRequest(
  deps: Pick<Deps, 'db' | 'clock'>,
  req: Request,
): Promise<PatientActor | undefined> {
  const token = cookieOf(req, LINK_COOKIE);
  if (!token) return undefined;
  const link = await linkOf(deps, token);
  if (!link) return undefined;
  refuseDeadLink(link, deps.clock.now());
  return {
    kind: 'patient',
    quoteLinkId: link.quote_link_id,
    quoteId: link.quote_id,
    siteId: link.site_id,
    from: req.ip ?? 'unknown',
  };
}

function cookieOf(req: Request, name: string): string | undefined {
  for (const part of (req.headers.cookie ?? '').split(';')) {
    const [key, value] = part.trim().split('=');
    if (key === name && value) return decodeURIComponent(value);
  }
  return undefined;
}
