import { call } from '#client/api/call.ts';
import { startMyCheckout } from '#contract/portal';

/**
 * Opens the hosted card page for what is due and goes there. The attempt's key is kept for the tab, by purpose and amount, so that
 * a second click, a reload or a lost answer leads to the same page and never to a second payment.
 */
export async function payNow(purpose: 'deposit' | 'balance', amountMinor: number): Promise<void> {
  const kept = `tl.attempt.${purpose}.${amountMinor}`;
  const attemptKey = sessionStorage.getItem(kept) ?? crypto.randomUUID();
  sessionStorage.setItem(kept, attemptKey);
  const checkout = await call(startMyCheckout, { body: { attemptKey, purpose } });
  if (checkout.url === null) {
    // Already paid or ended: the page shows which, and a new try gets a key of its own.
    sessionStorage.removeItem(kept);
    window.location.assign(`/my-quote?attempt=${checkout.attemptKey}`);
  } else window.location.assign(checkout.url);
}
