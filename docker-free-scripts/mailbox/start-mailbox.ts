import { randomUUID } from 'node:crypto';
import { mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import type { AddressInfo } from 'node:net';
import path from 'node:path';
import express from 'express';
import { type ParsedMail, simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';
import { listPage, messagePage } from './pages.ts';

/** A mail as it came, told in a few words. */
export interface MailSummary {
  readonly id: string;
  readonly to: string;
  readonly subject: string;
  readonly at: string;
  readonly attachments: readonly {
    readonly filename: string;
    readonly contentType: string;
    readonly size: number;
  }[];
}

export interface MailDetail extends MailSummary {
  readonly text: string;
  readonly html: string;
}

export interface Mailbox {
  readonly smtpUrl: string;
  readonly pageUrl: string;
  /** Newest first. */
  mails(): Promise<MailDetail[]>;
  /** Bytes of the n-th attachment (from 0) of a mail. */
  attachment(id: string, n: number): Promise<Buffer>;
  stop(): Promise<void>;
}

export interface MailboxOptions {
  readonly smtpPort?: number;
  readonly pagePort?: number;
  /** Where mails are kept; without one they are kept in memory. */
  readonly folder?: string;
}

/** A real SMTP server on loopback that keeps every mail, and a page to read them. Nothing leaves the machine. */
export async function startMailbox(options: MailboxOptions = {}): Promise<Mailbox> {
  const kept = keeper(options.folder);
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['AUTH', 'STARTTLS'],
    size: 30 * 1024 * 1024,
    onData(stream, _session, done) {
      const chunks: Buffer[] = [];
      stream.on('data', (chunk: Buffer) => chunks.push(chunk));
      stream.on('end', () => {
        kept.add(Buffer.concat(chunks));
        done();
      });
    },
  });
  await new Promise<void>((resolve, reject) => {
    smtp.once('error', reject);
    smtp.listen(options.smtpPort ?? 0, '127.0.0.1', () => resolve());
  });
  const mails = async (): Promise<MailDetail[]> =>
    await Promise.all(
      kept
        .ids()
        .reverse()
        .map(async (id) => detailOf(id, await simpleParser(kept.read(id)))),
    );
  const attachment = async (id: string, n: number): Promise<Buffer> =>
    (await simpleParser(kept.read(id))).attachments[n]?.content ?? Buffer.alloc(0);
  const page = await listenPage({ mails, attachment, clear: kept.clear }, options.pagePort ?? 0);
  return {
    smtpUrl: `smtp://127.0.0.1:${(smtp.server.address() as AddressInfo).port}`,
    pageUrl: page.url,
    mails,
    attachment,
    async stop() {
      await new Promise<void>((resolve) => smtp.close(() => resolve()));
      await page.stop();
    },
  };
}

interface Keeper {
  add(raw: Buffer): void;
  ids(): string[];
  read(id: string): Buffer;
  clear(): void;
}

/** Raw mails by an id that sorts by arrival, in a folder or in memory. */
function keeper(folder: string | undefined): Keeper {
  let count = 0;
  const nextId = (): string => {
    count += 1;
    return `${String(Date.now()).padStart(15, '0')}-${String(count).padStart(6, '0')}-${randomUUID().slice(0, 8)}`;
  };
  if (folder === undefined) {
    const raw = new Map<string, Buffer>();
    return {
      add: (bytes) => raw.set(nextId(), bytes),
      ids: () => [...raw.keys()],
      read: (id) => raw.get(id) ?? Buffer.alloc(0),
      clear: () => raw.clear(),
    };
  }
  mkdirSync(folder, { recursive: true });
  const names = (): string[] =>
    readdirSync(folder)
      .filter((name) => name.endsWith('.eml'))
      .sort();
  return {
    add: (bytes) => writeFileSync(path.join(folder, `${nextId()}.eml`), bytes),
    ids: () => names().map((name) => name.slice(0, -4)),
    read: (id) =>
      names().includes(`${id}.eml`) ? readFileSync(path.join(folder, `${id}.eml`)) : Buffer.alloc(0),
    clear: () => {
      for (const name of names()) rmSync(path.join(folder, name));
    },
  };
}

function detailOf(id: string, mail: ParsedMail): MailDetail {
  const to = Array.isArray(mail.to) ? mail.to.map((each) => each.text).join(', ') : (mail.to?.text ?? '');
  return {
    id,
    to,
    subject: mail.subject ?? '',
    at: new Date(Number(id.slice(0, 15))).toISOString(),
    text: mail.text ?? '',
    html: typeof mail.html === 'string' ? mail.html : '',
    attachments: mail.attachments.map((file) => ({
      filename: file.filename ?? 'file',
      contentType: file.contentType,
      size: file.size,
    })),
  };
}

interface PageParts {
  mails(): Promise<MailDetail[]>;
  attachment(id: string, n: number): Promise<Buffer>;
  clear(): void;
}

async function listenPage(parts: PageParts, port: number): Promise<{ url: string; stop(): Promise<void> }> {
  const app = express();
  const find = async (id: string): Promise<MailDetail | undefined> =>
    (await parts.mails()).find((mail) => mail.id === id);
  app.get('/', async (_req, res) => res.type('html').send(listPage(await parts.mails())));
  app.get('/mails/:id', async (req, res) => {
    const mail = await find(req.params.id);
    if (mail) res.type('html').send(messagePage(mail));
    else res.status(404).type('text').send('There is no such mail.');
  });
  app.get('/api/mails', async (_req, res) => res.json(await parts.mails()));
  app.get('/api/mails/:id', async (req, res) => {
    const mail = await find(req.params.id);
    res.status(mail ? 200 : 404).json(mail ?? { error: 'There is no such mail.' });
  });
  app.get('/api/mails/:id/attachments/:n', async (req, res) => {
    const n = Number(req.params.n);
    const mail = await find(req.params.id);
    const file = mail?.attachments[n];
    if (!file) {
      res.status(404).type('text').send('There is no such attachment.');
      return;
    }
    res
      .type(file.contentType)
      .attachment(file.filename)
      .send(await parts.attachment(req.params.id, n));
  });
  app.delete('/api/mails', (_req, res) => {
    parts.clear();
    res.status(204).end();
  });
  const server = app.listen(port, '127.0.0.1');
  await new Promise<void>((resolve, reject) => {
    server.once('listening', resolve);
    server.once('error', reject);
  });
  return {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    stop: () =>
      new Promise((resolve) => {
        server.closeAllConnections();
        server.close(() => resolve());
      }),
  };
}
