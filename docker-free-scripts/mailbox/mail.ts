import { type ParsedMail, simpleParser } from 'mailparser';

/** A mail as it came, told in a few words. */
export interface MailSummary {
  readonly id: string;
  readonly to: string;
  readonly subject: string;
  /** When it came, ISO 8601 in UTC. */
  readonly at: string;
  readonly attachments: readonly {
    readonly filename: string;
    readonly contentType: string;
    /** Bytes. */
    readonly size: number;
  }[];
}

export interface MailDetail extends MailSummary {
  readonly text: string;
  /** Empty when the mail has none. */
  readonly html: string;
}

export interface ReadMail {
  readonly detail: MailDetail;
  readonly attachments: readonly Buffer[];
}

export async function readMail(id: string, at: string, raw: Buffer): Promise<ReadMail> {
  const mail = await simpleParser(raw);
  const detail: MailDetail = {
    id,
    to: recipients(mail),
    subject: mail.subject ?? '',
    at,
    text: mail.text ?? '',
    html: typeof mail.html === 'string' ? mail.html : '',
    attachments: mail.attachments.map((file, n) => ({
      filename: file.filename ?? `attachment-${n + 1}`,
      contentType: file.contentType,
      size: file.size,
    })),
  };
  return { detail, attachments: mail.attachments.map((file) => file.content) };
}

function recipients(mail: ParsedMail): string {
  const to = mail.to === undefined ? [] : [mail.to].flat();
  return to.map((each) => each.text).join(', ');
}
