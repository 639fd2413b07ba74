import type { CardBehaviour, CardFailure } from '#stand-ins/stripe-mock/state/records';

/** Published test numbers and what each of them does. */
const BEHAVIOURS: Readonly<Record<string, CardBehaviour>> = {
  '4242424242424242': 'succeeds',
  '4000000000000002': 'declined',
  '4000000000009995': 'insufficient_funds',
  '4000000000000069': 'expired',
  '4000000000000127': 'wrong_code',
  '4000000000000119': 'processing_error',
  '4000002760003184': 'authentication',
  '4000008400001629': 'authentication_then_decline',
  '4000000000000259': 'disputed',
  '4000000000001976': 'inquiry',
  '4000000000007726': 'refund_pending',
  '4000000000005126': 'refund_fails_later',
};

const DECLINED = decline('card_declined', 'generic_decline', 'Your card was declined.');

const DECLINES: Partial<Record<CardBehaviour, CardFailure>> = {
  declined: DECLINED,
  authentication_then_decline: DECLINED,
  insufficient_funds: decline('card_declined', 'insufficient_funds', 'Your card has insufficient funds.'),
  expired: decline('expired_card', 'expired_card', 'Your card has expired.', 'exp_month'),
  wrong_code: decline('incorrect_cvc', 'incorrect_cvc', "Your card's security code is incorrect.", 'cvc'),
  processing_error: decline(
    'processing_error',
    'processing_error',
    'An error occurred while processing your card. Try again in a little bit.',
  ),
  unknown: decline(
    'card_declined',
    'test_mode_live_card',
    'Your card was declined. Only test cards work here, and this is not one of them.',
  ),
};

export function behaviourOf(cardNumber: string): CardBehaviour {
  return BEHAVIOURS[cardNumber] ?? 'unknown';
}

/** The issuer's refusal of a card that behaves so, or null where it accepts. */
export function declineOf(behaviour: CardBehaviour): CardFailure | null {
  return DECLINES[behaviour] ?? null;
}

export function needsAuthentication(behaviour: CardBehaviour): boolean {
  return behaviour === 'authentication' || behaviour === 'authentication_then_decline';
}

export function brandOf(cardNumber: string): string {
  if (cardNumber.startsWith('4')) return 'visa';
  return cardNumber.startsWith('5') ? 'mastercard' : 'unknown';
}

/** ISO/IEC 7812: the check digit by the Luhn formula. */
export function hasValidCheckDigit(cardNumber: string): boolean {
  const sum = [...cardNumber].reverse().reduce((total, digit, index) => {
    const value = Number(digit) * (index % 2 === 0 ? 1 : 2);
    return total + (value > 9 ? value - 9 : value);
  }, 0);
  return sum % 10 === 0;
}

function decline(
  code: string,
  declineCode: string,
  message: string,
  param: string | null = null,
): CardFailure {
  return { code, declineCode, message, param };
}
