import type { AddressInfo } from 'node:net';
import { SMTPServer } from 'smtp-server';
import { arrivalOf, folderKeeper, type Keeper, memoryKeeper } from './keeper.ts';
import { type MailDetail, type ReadMail, readMail } from './mail.ts';
import { startPage } from './page-server.ts';

export type { MailDetail, MailSummary } from './mail.ts';

export interface Mailbox {
  readonly smtpUrl: string;
  readonly pageUrl: string;
  /** Newest first. */
  mails(): Promise<MailDetail[]>;
  /** Bytes of the n-th attachment (from 0) of a mail; empty when there is none. */
  attachment(id: string, n: number): Promise<Buffer>;
  stop(): Promise<void>;
}

export interface MailboxOptions {
  /** A free port unless given. */
  readonly smtpPort?: number;
  /** A free port unless given. */
  readonly pagePort?: number;
  /** Where mails are kept; without one they are kept in memory. */
  readonly folder?: string;
}

/** A real SMTP server on loopback that keeps every mail, and a page to read them. Nothing leaves the machine. */
export async function startMailbox(options: MailboxOptions = {}): Promise<Mailbox> {
  const keeper = options.folder === undefined ? memoryKeeper() : folderKeeper(options.folder);
  const reader = mailReader(keeper);
  const smtp = await startSmtp(keeper, options.smtpPort ?? 0);
  const page = await startPage({ ...reader, clear: keeper.clear }, options.pagePort ?? 0).catch(
    async (error: unknown) => {
      await smtp.stop();
      throw error;
    },
  );
  return {
    smtpUrl: smtp.url,
    pageUrl: page.url,
    mails: reader.mails,
    attachment: async (id, n) => (await reader.mail(id))?.attachments[n] ?? Buffer.alloc(0),
    async stop() {
      await smtp.stop();
      await page.stop();
    },
  };
}

/** Reads kept mails; each is parsed once, attachments are read anew when asked for. */
function mailReader(keeper: Keeper) {
  const told = new Map<string, MailDetail>();
  const mail = async (id: string): Promise<ReadMail | undefined> => {
    const raw = keeper.read(id);
    return raw && (await readMail(id, arrivalOf(id), raw));
  };
  const mails = async (): Promise<MailDetail[]> => {
    const ids = keeper.ids().reverse();
    for (const id of ids.filter((each) => !told.has(each))) {
      const read = await mail(id);
      if (read) told.set(id, read.detail);
    }
    return ids.flatMap((id) => told.get(id) ?? []);
  };
  return { mail, mails };
}

/** The largest mail taken: a quote or a statement with its attachments is far below. */
const LARGEST_BYTES = 30 * 1024 * 1024;

async function startSmtp(keeper: Keeper, port: number): Promise<{ url: string; stop(): Promise<void> }> {
  const smtp = new SMTPServer({
    disabledCommands: ['AUTH', 'STARTTLS'],
    size: LARGEST_BYTES,
    // A sender that keeps its connection open must not hold up the end.
    closeTimeout: 500,
    onData(stream, _session, done) {
      const chunks: Buffer[] = [];
      stream.on('data', (chunk: Buffer) => {
        if (!stream.sizeExceeded) chunks.push(chunk);
      });
      stream.on('end', () => {
        try {
          if (stream.sizeExceeded) throw smtpRefusal(552, 'The mail is larger than 30 MB.');
          keeper.add(Buffer.concat(chunks));
          done();
        } catch (error) {
          done(error as Error);
        }
      });
    },
  });
  await new Promise<void>((resolve, reject) => {
    smtp.once('error', reject);
    smtp.listen(port, '127.0.0.1', () => resolve());
  });
  smtp.removeAllListeners('error');
  // A connection that breaks off is the sender's affair.
  smtp.on('error', () => undefined);
  return {
    url: `smtp://127.0.0.1:${(smtp.server.address() as AddressInfo).port}`,
    stop: () => new Promise((resolve) => smtp.close(() => resolve())),
  };
}

/** An error that smtp-server answers with this reply code (RFC 5321, section 4.2). */
function smtpRefusal(responseCode: number, words: string): Error {
  return Object.assign(new Error(words), { responseCode });
}
