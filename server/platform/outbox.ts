import { sqlInstant, type Trx } from './db.ts';
import { isDuplicate } from './db-errors.ts';
import type { Deps } from './deps.ts';

/** What can be printed and attached. The documents feature has one maker for each. */
export type DocumentKind = 'quote' | 'receipt' | 'day_close' | 'fee_statement';

/** What a mail says, as the renderers of documents/render make it. */
export interface MailText {
  readonly subject: string;
  readonly text: string;
  readonly html: string;
}

export interface QueuedMail {
  /** What sort of mail: 'quote_sent', 'receipt', 'invitation' … */
  readonly kind: string;
  /** A mail with a key that was queued before is not queued again: facts may be told twice. */
  readonly dedupeKey: string;
  readonly to: string;
  readonly mail: MailText;
  /** Documents attached; they are rendered just before sending, outside every transaction. */
  readonly attachments: readonly { readonly document: DocumentKind; readonly id: number }[];
  readonly subjectType: string;
  readonly subjectId: number;
}

/** Puts a mail into the outbox in the caller's transaction; a worker sends it after the commit. */
export async function queueMail(trx: Trx, deps: Pick<Deps, 'clock'>, queued: QueuedMail): Promise<void> {
  const now = sqlInstant(deps.clock.now());
  try {
    await trx('outbox_mails').insert({
      kind: queued.kind,
      dedupe_key: queued.dedupeKey,
      recipient: queued.to,
      subject: queued.mail.subject,
      body_text: queued.mail.text,
      body_html: queued.mail.html,
      attachments: JSON.stringify(queued.attachments),
      subject_type: queued.subjectType,
      subject_id: queued.subjectId,
      state: 'waiting',
      next_try_at: now,
      created_at: now,
    });
  } catch (error) {
    if (!isDuplicate(error, 'outbox_mails_once')) throw error;
  }
}
