import { createTransport } from 'nodemailer';

/** One mail as it leaves. */
export interface OutgoingMail {
  readonly to: string;
  readonly subject: string;
  readonly text: string;
  readonly html: string;
  /** Makes a repeated send recognisable: the Message-ID is built from it. */
  readonly key: string;
  readonly attachments: readonly {
    readonly filename: string;
    readonly contentType: string;
    readonly bytes: Buffer;
  }[];
}

export interface MailGateway {
  /** Hands a mail to the SMTP server; throws when it was not taken. */
  send(mail: OutgoingMail): Promise<void>;
  close(): void;
}

/** A gateway to the SMTP server of the configuration. */
export function smtpGateway(url: string, from: string): MailGateway {
  const transport = createTransport(url, {
    pool: false,
    connectionTimeout: 10_000,
    greetingTimeout: 10_000,
    socketTimeout: 20_000,
  } as object);
  const domain = from.split('@')[1]?.replace(/>$/, '') ?? 'localhost';
  return {
    async send(mail) {
      await transport.sendMail({
        from,
        to: mail.to,
        subject: mail.subject,
        text: mail.text,
        html: mail.html,
        messageId: `<${mail.key.replace(/[^\w.-]/g, '-')}@${domain}>`,
        attachments: mail.attachments.map((file) => ({
          filename: file.filename,
          contentType: file.contentType,
          content: file.bytes,
        })),
      });
    },
    close: () => transport.close(),
  };
}
