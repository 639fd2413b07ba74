import { readableAmount } from '#stand-ins/stripe-mock/objects/currencies';
import type { SessionRecord } from '#stand-ins/stripe-mock/state/records';
import type { Complaints, FieldName, FormTexts } from './card-form.ts';
import type { Html } from './html.ts';
import { html } from './html.ts';
import { page, summary, wayBack } from './layout.ts';

/** Numbers worth having at hand, with what they do. */
const TEST_CARDS = [
  ['4242 4242 4242 4242', 'is accepted'],
  ['4000 0000 0000 0002', 'is declined'],
  ['4000 0000 0000 9995', 'lacks the money'],
  ['4000 0027 6000 3184', 'asks you to approve first'],
  ['4000 0000 0000 0259', 'is accepted, then disputed'],
] as const;

export interface FormState {
  readonly texts: FormTexts;
  readonly complaints: Complaints;
  /** Why the last try did not pay, in words for the payer. */
  readonly declined: string | null;
}

export function paymentPage(session: SessionRecord, state: FormState): string {
  const amount = readableAmount(session.amountTotal, session.currency);
  return page(
    `Pay ${amount}`,
    html`${summary(session)}
<section aria-labelledby="how">
<h2 id="how">Pay by card</h2>
${state.declined === null ? null : html`<p class="alert" role="alert">${state.declined}</p>`}
<form method="post" action="/pay/${session.id}" novalidate>
${emailField(session, state)}
${field(state, { name: 'number', label: 'Card number', autocomplete: 'cc-number', numeric: true })}
<div class="pair">
${field(state, { name: 'expiry', label: 'Expiry, MM / YY', autocomplete: 'cc-exp', numeric: true })}
${field(state, { name: 'code', label: 'Security code', autocomplete: 'cc-csc', numeric: true })}
</div>
${field(state, { name: 'name', label: 'Name on card', autocomplete: 'cc-name', numeric: false })}
<button type="submit">Pay ${amount}</button>
</form>
<details><summary>Card numbers to try</summary>
<p>Any later date and any code will do. Never type a real card here.</p>
<dl>${TEST_CARDS.map(([number, effect]) => html`<dt>${number}</dt><dd>${effect}</dd>`)}</dl>
</details>
</section>`,
  );
}

function emailField(session: SessionRecord, state: FormState): Html {
  if (session.customerEmail !== null)
    return html`<p>Receipt to <strong>${session.customerEmail}</strong></p>`;
  return field(state, { name: 'email', label: 'E-mail', autocomplete: 'email', numeric: false });
}

interface Field {
  readonly name: FieldName;
  readonly label: string;
  readonly autocomplete: string;
  readonly numeric: boolean;
}

/** Number and code are never sent back into the page. */
const NOT_REPEATED: readonly FieldName[] = ['number', 'code'];

function field({ texts, complaints }: FormState, { name, label, autocomplete, numeric }: Field): Html {
  const complaint = complaints[name];
  const wrong = complaint === undefined ? null : html`<p class="wrong" id="${name}-wrong">${complaint}</p>`;
  const marks = wrong === null ? null : html` aria-invalid="true" aria-describedby="${name}-wrong"`;
  const value = NOT_REPEATED.includes(name) ? '' : texts[name];
  return html`<div class="field"><label for="${name}">${label}</label>
<input id="${name}" name="${name}" value="${value}" autocomplete="${autocomplete}" inputmode="${
    numeric ? 'numeric' : 'text'
  }" required${marks}>${wrong}</div>`;
}

export function authenticationPage(session: SessionRecord): string {
  return page(
    'Approve this payment',
    html`${summary(session)}
<section aria-labelledby="approve">
<h2 id="approve">Your bank asks</h2>
<p>Do you approve the payment of ${readableAmount(session.amountTotal, session.currency)}?</p>
<form method="post" action="/pay/${session.id}/authenticate">
<button type="submit" name="answer" value="approve">Approve</button>
<button type="submit" name="answer" value="refuse" class="second">Refuse</button>
</form>
</section>`,
  );
}

export function closedPage(session: SessionRecord, returnUrl: string): string {
  if (session.status === 'complete') {
    return page(
      'Already paid',
      html`<section><h1>This payment is complete</h1><p>Nothing more is asked of you.</p>
<p><a href="${returnUrl}">Continue</a></p></section>`,
    );
  }
  return page(
    'Expired',
    html`<section><h1>This payment page has expired</h1>
<p>Nothing was taken. Please ask for a new link where you came from.</p>${wayBack(session, 'Go back')}</section>`,
  );
}

export function unknownPage(): string {
  return page(
    'Not found',
    html`<section><h1>No such payment page</h1><p>Please check the link.</p></section>`,
  );
}
