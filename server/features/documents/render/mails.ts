import { type CurrencyCode, formatMoney, type Minor } from '#domain/money/index';
import { type ClinicDate, formatDay } from '#domain/time/index';
import type { PeopleMails } from '#server/features/users/index';
import type { MailText } from '#server/platform/outbox';

/** One mail as paragraphs, with at most one thing to do. */
interface Letter {
  readonly subject: string;
  readonly paragraphs: readonly string[];
  readonly action?: { readonly words: string; readonly url: string };
  readonly sign: string;
}

function escapeHtml(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#39;');
}

/** The same letter as plain text and as HTML: the house's colours, no pictures, nothing that tells who opened it. */
export function letterText({ subject, paragraphs, action, sign }: Letter): MailText {
  const text = [...paragraphs, ...(action ? [`${action.words}: ${action.url}`] : []), sign].join('\n\n');
  const body = paragraphs.map((each) => `<p style="margin:0 0 14px">${escapeHtml(each)}</p>`).join('');
  const button = action
    ? `<p style="margin:20px 0"><a href="${escapeHtml(action.url)}" style="background:#2b2f7f;color:#fffdf8;padding:10px 18px;text-decoration:none;font-weight:600">${escapeHtml(action.words)}</a></p>`
    : '';
  const html = `<div style="background:#f6f3ec;padding:24px;font-family:Manrope,Arial,sans-serif;font-size:15px;line-height:1.5;color:#17222b"><div style="max-width:34rem;margin:0 auto">${body}${button}<p style="margin:20px 0 0;color:#55626b">${escapeHtml(sign)}</p></div></div>`;
  return { subject, text, html };
}

/** A quote is ready: the link, how long it holds, and that nothing hurries. */
export function quoteMail(about: {
  readonly givenName: string;
  readonly clinic: string;
  readonly number: string;
  readonly validUntil: ClinicDate;
  readonly linkUrl: string;
}): MailText {
  return letterText({
    subject: `Your quote from ${about.clinic}`,
    paragraphs: [
      `Dear ${about.givenName},`,
      `your quote ${about.number} is ready. The page behind the link shows what is included, what you would pay and when, and what comes back if you change your mind.`,
      `Take the time you need: the price holds until ${formatDay(about.validUntil)}. The link is yours alone, so please do not pass it on.`,
    ],
    action: { words: 'Open your quote', url: about.linkUrl },
    sign: about.clinic,
  });
}

/** Money was received; the receipt is attached. */
export function receiptMail(about: {
  readonly payerName: string;
  readonly clinic: string;
  readonly number: string;
  readonly totalMinor: Minor;
  readonly currency: CurrencyCode;
  readonly leftMinor: Minor;
}): MailText {
  const left =
    about.leftMinor > 0
      ? ` ${formatMoney(about.leftMinor, about.currency)} is left to pay.`
      : ' Everything is paid.';
  return letterText({
    subject: `Receipt ${about.number} from ${about.clinic}`,
    paragraphs: [
      `Dear ${about.payerName},`,
      `thank you: we received ${formatMoney(about.totalMinor, about.currency)}.${left}`,
      `Your receipt ${about.number} is attached.`,
    ],
    sign: about.clinic,
  });
}

/** What the people of the clinic are sent. */
export const peopleMails: PeopleMails = {
  invitation: ({ name, invitedBy, url }) =>
    letterText({
      subject: 'Your sign-in at the clinic’s money desk',
      paragraphs: [
        `Dear ${name},`,
        `${invitedBy} has invited you to Tenderlight, the clinic’s money desk. Set a password to begin; the link holds for a week.`,
      ],
      action: { words: 'Set your password', url },
      sign: 'Tenderlight',
    }),
  reset: ({ name, url }) =>
    letterText({
      subject: 'A new password for the clinic’s money desk',
      paragraphs: [
        `Dear ${name},`,
        'somebody asked for a new password for you. If it was you, set it within an hour. If not, do nothing: the old one stays.',
      ],
      action: { words: 'Set a new password', url },
      sign: 'Tenderlight',
    }),
};
