import { addMs, type Instant } from '#domain/time/index';
import type { MailGateway } from '#server/gateways/index';
import { rawRows, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import type { DocumentKind } from '#server/platform/outbox';
import { inTransaction } from '#server/platform/transaction';
import { type DocumentMakers, documentFor } from './document-for.ts';

interface DueMail {
  readonly outbox_mail_id: number;
  readonly dedupe_key: string;
  readonly recipient: string;
  readonly subject: string;
  readonly body_text: string;
  readonly body_html: string;
  readonly attachments: string;
  readonly tries: number;
}

export type MailDeps = Deps & { readonly gateways: { readonly mail: MailGateway } };

const BATCH = 10;
/** Longer than a slow SMTP conversation: a claimed mail whose worker died is taken up again after it. */
const LEASE_MS = 120_000;
const GIVE_UP_AFTER = 12;

/** Sends what is due; returns how many were sent. Claims with SKIP LOCKED, sends outside the transaction, then marks. */
export async function deliverDueMails(deps: MailDeps, makers: DocumentMakers): Promise<number> {
  const due = await claim(deps);
  let sent = 0;
  for (const mail of due) {
    try {
      await send(deps, makers, mail);
      await mark(deps, mail.outbox_mail_id, {
        state: 'sent',
        sent_at: sqlInstant(deps.clock.now()),
        last_error: null,
      });
      sent += 1;
    } catch (error) {
      deps.log.warn({ mailId: mail.outbox_mail_id, tries: mail.tries, code: codeOf(error) }, 'mail not sent');
      const state = mail.tries >= GIVE_UP_AFTER ? 'failed' : 'waiting';
      await mark(deps, mail.outbox_mail_id, {
        state,
        last_error: codeOf(error),
        next_try_at: sqlInstant(backoff(deps.clock.now(), mail.tries)),
      });
    }
  }
  return sent;
}

async function claim(deps: MailDeps): Promise<DueMail[]> {
  return await inTransaction(deps.db, async (trx) => {
    const now = deps.clock.now();
    const rows = await rawRows<DueMail>(
      trx,
      `SELECT outbox_mail_id, dedupe_key, recipient, subject, body_text, body_html, attachments, tries + 1 AS tries
       FROM outbox_mails WHERE state = 'waiting' AND next_try_at <= ? ORDER BY next_try_at, outbox_mail_id
       LIMIT ${BATCH} FOR UPDATE SKIP LOCKED`,
      [sqlInstant(now)],
    );
    if (rows.length > 0) {
      await trx('outbox_mails')
        .whereIn(
          'outbox_mail_id',
          rows.map((row) => row.outbox_mail_id),
        )
        .update({ tries: trx.raw('tries + 1'), next_try_at: sqlInstant(addMs(now, LEASE_MS)) });
    }
    return rows;
  });
}

async function send(deps: MailDeps, makers: DocumentMakers, mail: DueMail): Promise<void> {
  const wanted = JSON.parse(mail.attachments) as { document: DocumentKind; id: number }[];
  const files = [];
  for (const { document, id } of wanted) {
    const made = await documentFor(deps, makers, document, id);
    files.push({ filename: made.filename, contentType: 'application/pdf', bytes: made.bytes });
  }
  await deps.gateways.mail.send({
    to: mail.recipient,
    subject: mail.subject,
    text: mail.body_text,
    html: mail.body_html,
    key: mail.dedupe_key,
    attachments: files,
  });
}

async function mark(
  deps: MailDeps,
  mailId: number,
  change: Readonly<Record<string, unknown>>,
): Promise<void> {
  await inTransaction(deps.db, (trx) => trx('outbox_mails').where({ outbox_mail_id: mailId }).update(change));
}

/** 5 s, 10 s, 20 s … at most an hour. */
function backoff(now: Instant, tries: number): Instant {
  return addMs(now, Math.min(3_600_000, 5_000 * 2 ** (tries - 1)));
}

function codeOf(error: unknown): string {
  if (typeof error === 'object' && error !== null && 'code' in error) return String(error.code).slice(0, 200);
  return error instanceof Error ? error.name : 'unknown';
}
