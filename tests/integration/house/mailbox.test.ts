import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import nodemailer, { type SendMailOptions } from 'nodemailer';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { type Mailbox, type MailSummary, startMailbox } from '#stand-ins/mailbox/start-mailbox';
import { testMailbox } from '#tests/support/test-mailbox';

const FROM = 'desk@lanternquay.example';
const PDF = Buffer.from('%PDF-1.7 with bytes above ASCII: \u00e9\u0000\u00ff', 'latin1');

async function send(mailbox: Mailbox, mail: SendMailOptions): Promise<void> {
  const transport = nodemailer.createTransport(mailbox.smtpUrl);
  try {
    await transport.sendMail({ from: FROM, to: 'mara@saltmarch.example', ...mail });
  } finally {
    transport.close();
  }
}

async function list(mailbox: Mailbox): Promise<MailSummary[]> {
  return (await (await fetch(`${mailbox.pageUrl}/api/mails`)).json()) as MailSummary[];
}

describe('the mailbox', () => {
  let mailbox: Mailbox;
  beforeAll(async () => {
    mailbox = await testMailbox();
  });
  afterEach(async () => {
    await fetch(`${mailbox.pageUrl}/api/mails`, { method: 'DELETE' });
  });
  afterAll(() => mailbox.stop());

  test('mails sent by SMTP · are listed newest first with what is attached', async () => {
    await send(mailbox, { subject: 'First', text: 'one', to: ['a@x.example', 'b@x.example'] });
    await send(mailbox, {
      subject: 'Receipt LQ-26-00881 · Łucja Żółw',
      text: 'two',
      attachments: [{ filename: 'receipt.pdf', content: PDF, contentType: 'application/pdf' }],
    });
    const mails = await list(mailbox);
    expect(mails.map((mail) => [mail.subject, mail.to, mail.attachments])).toEqual([
      [
        'Receipt LQ-26-00881 · Łucja Żółw',
        'mara@saltmarch.example',
        [{ filename: 'receipt.pdf', contentType: 'application/pdf', size: PDF.length }],
      ],
      ['First', 'a@x.example, b@x.example', []],
    ]);
    expect(mails.every((mail) => /^\d{4}-\d\d-\d\dT[\d:.]+Z$/.test(mail.at))).toBe(true);
    expect(Object.keys(mails[0] ?? {}).sort()).toEqual(['at', 'attachments', 'id', 'subject', 'to']);
  });

  test('one mail · comes with its text, its HTML and its attachments byte for byte', async () => {
    await send(mailbox, {
      subject: 'Quote',
      text: 'plain',
      html: '<p>rich</p>',
      attachments: [{ filename: 'quote.pdf', content: PDF, contentType: 'application/pdf' }],
    });
    const id = (await list(mailbox))[0]?.id ?? '';
    const detail = await (await fetch(`${mailbox.pageUrl}/api/mails/${id}`)).json();
    expect(detail).toMatchObject({ id, subject: 'Quote', text: 'plain', html: '<p>rich</p>' });
    const file = await fetch(`${mailbox.pageUrl}/api/mails/${id}/attachments/0`);
    expect(file.headers.get('content-type')).toBe('application/pdf');
    expect(file.headers.get('content-disposition')).toBe('attachment; filename=quote.pdf');
    expect(Buffer.from(await file.arrayBuffer()).equals(PDF)).toBe(true);
    expect((await mailbox.attachment(id, 0)).equals(PDF)).toBe(true);
  });

  test('HTML of a mail · stands escaped in a sandboxed frame, scripts and network forbidden', async () => {
    const hostile = '"></iframe><script>alert(1)</script><img src="https://far.example/x.png">';
    await send(mailbox, { subject: '<b>bold</b>', html: hostile });
    const id = (await list(mailbox))[0]?.id ?? '';
    const answer = await fetch(`${mailbox.pageUrl}/mails/${id}`);
    const html = await answer.text();
    expect(html).toContain('Local mailbox, nothing leaves this machine');
    expect(html).toContain('sandbox="allow-popups allow-popups-to-escape-sandbox"');
    expect(html).not.toContain('<script');
    expect(html).not.toContain('<b>bold');
    expect(html.match(/<iframe/g)).toHaveLength(1);
    expect(html.match(/<\/iframe>/g)).toHaveLength(1);
    expect(answer.headers.get('content-security-policy')).toContain("default-src 'none'");
  });

  test('what is not there · is answered by 404, on pages and as JSON', async () => {
    for (const there of [
      '/mails/x',
      '/api/mails/x',
      '/api/mails/..%2f..%2fpackage',
      '/api/mails/x/attachments/0',
    ])
      expect([there, (await fetch(mailbox.pageUrl + there)).status]).toEqual([there, 404]);
    await send(mailbox, { subject: 'Bare', text: 'nothing attached' });
    const id = (await list(mailbox))[0]?.id ?? '';
    expect((await fetch(`${mailbox.pageUrl}/api/mails/${id}/attachments/0`)).status).toBe(404);
  });

  test('DELETE · empties the mailbox', async () => {
    await send(mailbox, { subject: 'Gone soon', text: '.' });
    expect((await fetch(`${mailbox.pageUrl}/api/mails`, { method: 'DELETE' })).status).toBe(204);
    expect(await list(mailbox)).toEqual([]);
    expect(await mailbox.mails()).toEqual([]);
  });

  test('a mail above the limit · is refused to its sender and not kept', async () => {
    const large = { filename: 'large.bin', content: Buffer.alloc(31 * 1024 * 1024) };
    await expect(send(mailbox, { subject: 'Large', text: '.', attachments: [large] })).rejects.toMatchObject({
      responseCode: 552,
    });
    expect(await list(mailbox)).toEqual([]);
  });
});

test('a mailbox with a folder · has its mails again after a restart', async () => {
  const folder = mkdtempSync(path.join(tmpdir(), 'tl-mail-'));
  try {
    const before = await startMailbox({ folder });
    await send(before, { subject: 'Kept', text: 'over night' });
    await before.stop();
    const after = await startMailbox({ folder });
    expect((await after.mails()).map((mail) => [mail.subject, mail.text.trim()])).toEqual([
      ['Kept', 'over night'],
    ]);
    await after.stop();
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
});
