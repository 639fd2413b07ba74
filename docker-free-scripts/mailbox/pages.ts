import type { MailDetail } from './mail.ts';

const STYLE = `
:root { color-scheme: light dark; }
body { font: 15px/1.5 system-ui, sans-serif; max-width: 52rem; margin: 0 auto; padding: 1rem; }
.banner { border: 1px solid; padding: 0.4rem 0.8rem; }
ul { list-style: none; padding: 0; }
li { padding: 0.6rem 0; border-bottom: 1px solid #8886; overflow-wrap: anywhere; }
small { opacity: 0.8; }
iframe { box-sizing: border-box; width: 100%; height: 65vh; border: 1px solid #888; background: #fff; }
`;

/** Links of a mail open in a window of their own: inside the frame they could run nothing. */
const LINKS_OPEN_OUTSIDE = '<base target="_blank">';

function escaped(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}

function page(title: string, body: string): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escaped(title)}</title>
<style>${STYLE}</style>
</head>
<body>
<p class="banner">Local mailbox, nothing leaves this machine</p>
<main>${body}</main>
</body>
</html>`;
}

/** Every mail, newest first. */
export function listPage(mails: readonly MailDetail[]): string {
  const rows = mails.map((mail) => {
    const files = mail.attachments.length === 0 ? '' : ` · ${mail.attachments.length} attached`;
    const subject = escaped(mail.subject || 'No subject');
    return `<li><a href="/mails/${mail.id}">${subject}</a><br><small>to ${escaped(mail.to)} · ${moment(mail.at)}${files}</small></li>`;
  });
  const list = rows.length === 0 ? '<p>No mail has come yet.</p>' : `<ul>${rows.join('')}</ul>`;
  return page('Mailbox', `<h1>Mailbox</h1>${list}`);
}

/** One mail. Its HTML stands in a sandboxed frame that runs no script and reaches no network. */
export function messagePage(mail: MailDetail): string {
  const content = mail.html || `<pre style="white-space: pre-wrap">${escaped(mail.text)}</pre>`;
  const files = mail.attachments.map(
    (file, n) =>
      `<li><a href="/api/mails/${mail.id}/attachments/${n}">${escaped(file.filename)}</a> <small>${file.size.toLocaleString('en')} bytes</small></li>`,
  );
  const subject = mail.subject || 'No subject';
  return page(
    subject,
    `<p><a href="/">All mail</a></p>
<h1>${escaped(subject)}</h1>
<p><small>to ${escaped(mail.to)} · ${moment(mail.at)}</small></p>
<iframe title="The mail" sandbox="allow-popups allow-popups-to-escape-sandbox" srcdoc="${escaped(LINKS_OPEN_OUTSIDE + content)}"></iframe>
${files.length === 0 ? '' : `<h2>Attached</h2><ul>${files.join('')}</ul>`}`,
  );
}

export function missingPage(): string {
  return page('No such mail', '<p>There is no such mail.</p><p><a href="/">All mail</a></p>');
}

/** An instant to the second, in UTC and saying so. */
function moment(at: string): string {
  return `${at.slice(0, 19).replace('T', ' ')} UTC`;
}
