import type { MailDetail } from './start-mailbox.ts';

function escaped(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}

function frame(title: string, body: string): string {
  return `<!doctype html><html lang="en"><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1"><title>${escaped(title)}</title>
<style>body{font:15px/1.5 system-ui,sans-serif;max-width:52rem;margin:0 auto;padding:1rem;color:#222;background:#fff}
p.banner{background:#eef;padding:.5rem 1rem}li{padding:.5rem 0;border-bottom:1px solid #ddd}ul{list-style:none;padding:0}iframe{width:100%;height:60vh;border:1px solid #888}small{color:#555}</style>
<p class="banner">Local mailbox, nothing leaves this machine.</p>${body}</html>`;
}

/** Every mail, newest first. */
export function listPage(mails: readonly MailDetail[]): string {
  const rows = mails.map(
    (mail) =>
      `<li><a href="/mails/${mail.id}">${escaped(mail.subject)}</a><br><small>to ${escaped(mail.to)}, ${mail.at}${mail.attachments.length > 0 ? `, ${mail.attachments.length} attached` : ''}</small></li>`,
  );
  return frame(
    'Mailbox',
    `<h1>Mailbox</h1>${rows.length === 0 ? '<p>No mail yet.</p>' : `<ul>${rows.join('')}</ul>`}`,
  );
}

/** One mail; its HTML runs in a frame that may do nothing but open links. */
export function messagePage(mail: MailDetail): string {
  const files = mail.attachments.map(
    (file, n) =>
      `<li><a href="/api/mails/${mail.id}/attachments/${n}">${escaped(file.filename)}</a> <small>${file.size} bytes</small></li>`,
  );
  return frame(
    mail.subject,
    `<p><a href="/">All mail</a></p><h1>${escaped(mail.subject)}</h1><p><small>to ${escaped(mail.to)}, ${mail.at}</small></p>
<iframe title="The mail" sandbox="allow-popups allow-top-navigation-by-user-activation" srcdoc="${escaped(mail.html || `<pre>${escaped(mail.text)}</pre>`)}"></iframe>${files.length > 0 ? `<h2>Attached</h2><ul>${files.join('')}</ul>` : ''}`,
  );
}
