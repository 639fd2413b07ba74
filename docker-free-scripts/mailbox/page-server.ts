import type { AddressInfo } from 'node:net';
import express from 'express';
import type { MailDetail, ReadMail } from './mail.ts';
import { listPage, messagePage, missingPage } from './pages.ts';

export interface PageParts {
  /** Newest first. */
  mails(): Promise<MailDetail[]>;
  mail(id: string): Promise<ReadMail | undefined>;
  clear(): void;
}

/** A mail may show its own styles and pictures it carries, run nothing and fetch nothing; frames of srcdoc inherit this. */
const POLICY =
  "default-src 'none'; style-src 'unsafe-inline'; img-src data:; form-action 'self'; base-uri 'self'";

/** Pages to read the mail and the same as JSON, on loopback. */
export async function startPage(
  parts: PageParts,
  port: number,
): Promise<{ url: string; stop(): Promise<void> }> {
  const app = express();
  app.disable('x-powered-by');
  app.use((_req, res, next) => {
    res.set({
      'Content-Security-Policy': POLICY,
      'X-Content-Type-Options': 'nosniff',
      'Referrer-Policy': 'no-referrer',
      'Cache-Control': 'no-store',
    });
    next();
  });
  app.get('/', async (_req, res) => {
    res.type('html').send(listPage(await parts.mails()));
  });
  app.get('/mails/:id', async (req, res) => {
    const mail = await parts.mail(req.params.id);
    if (mail) res.type('html').send(messagePage(mail.detail));
    else res.status(404).type('html').send(missingPage());
  });
  app.get('/api/mails', async (_req, res) => {
    res.json((await parts.mails()).map(({ text: _text, html: _html, ...summary }) => summary));
  });
  app.get('/api/mails/:id', async (req, res) => {
    const mail = await parts.mail(req.params.id);
    res.status(mail ? 200 : 404).json(mail?.detail ?? { error: 'There is no such mail.' });
  });
  app.get('/api/mails/:id/attachments/:n', async (req, res) => {
    const mail = await parts.mail(req.params.id);
    const n = Number(req.params.n);
    const file = mail?.detail.attachments[n];
    if (!file) {
      res.status(404).type('text').send('There is no such attachment.');
      return;
    }
    res.attachment(file.filename).type(file.contentType).send(mail?.attachments[n]);
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
        server.close(() => resolve());
        server.closeAllConnections();
      }),
  };
}
