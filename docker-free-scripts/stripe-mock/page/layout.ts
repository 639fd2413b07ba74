import { readableAmount } from '#stand-ins/stripe-mock/objects/currencies';
import type { SessionRecord } from '#stand-ins/stripe-mock/state/records';
import { Html, html } from './html.ts';
import { STYLE } from './style.ts';

export function page(title: string, content: Html): string {
  return html`<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="robots" content="noindex">
<title>${title}</title>
<style>${new Html(STYLE)}</style>
</head>
<body>
<header class="banner">Local stand-in, no money moves</header>
<main>${content}</main>
</body>
</html>
`.text;
}

/** What is being paid, and the way back. */
export function summary(session: SessionRecord): Html {
  const rows = session.lineItems.map(
    ({ name, quantity, unitAmount }) =>
      html`<tr><th scope="row">${name}${
        quantity === 1 ? null : html` <span class="quantity">× ${quantity}</span>`
      }</th><td>${readableAmount(unitAmount * quantity, session.currency)}</td></tr>`,
  );
  return html`<section aria-labelledby="what">
<h1 id="what">Your payment</h1>
<table>
<tbody>${rows}</tbody>
<tfoot><tr><th scope="row">Total</th><td>${readableAmount(session.amountTotal, session.currency)}</td></tr></tfoot>
</table>
${wayBack(session, 'Go back without paying')}
</section>`;
}

export function wayBack(session: SessionRecord, label: string): Html | null {
  return session.cancelUrl === null ? null : html`<p><a href="${session.cancelUrl}">${label}</a></p>`;
}
