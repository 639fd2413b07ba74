import type { z } from 'zod';
import { ApiError, noSuch } from '#stand-ins/stripe-mock/api/errors';
import { readCardForm } from '#stand-ins/stripe-mock/page/card-form';
import type { PayerDesk, PayerStep } from '#stand-ins/stripe-mock/page/pay-as-payer';
import { returnUrlOf } from '#stand-ins/stripe-mock/page/pay-as-payer';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { payCommand } from './commands.ts';

export interface PayResult {
  readonly outcome: 'paid' | 'declined' | 'must_authenticate' | 'not_open';
  /** Words the page would show, after a decline. */
  readonly message: string | null;
  /** Where the payer is sent once paid. */
  readonly returnUrl: string | null;
}

/** Fills in the hosted page as a payer would and presses its buttons; form, checks and steps are the page's own. */
export async function pay(
  { service, desk }: { readonly service: Service; readonly desk: PayerDesk },
  sessionId: string,
  command: z.output<typeof payCommand>,
): Promise<{ result: PayResult; sentOn: () => void }> {
  const session = service.store.find('sessions', sessionId);
  if (session === undefined) throw noSuch('checkout.session', sessionId);
  const nextYear = new Date(service.clock.nowMs()).getUTCFullYear() + 1;
  const texts = {
    email: command.email,
    number: command.cardNumber,
    expiry: `12 / ${nextYear}`,
    code: '123',
    name: command.name,
  };
  const form = readCardForm(texts, session.customerEmail !== null, service.clock.nowMs());
  if (!form.ok) {
    throw new ApiError(400, {
      type: 'invalid_request_error',
      message: Object.values(form.complaints).join(' '),
    });
  }
  const first = await desk.confirm(sessionId, form.entry);
  const asked = first.outcome.kind === 'must_authenticate' && command.authentication !== null;
  const last = asked ? await desk.answer(sessionId, command.authentication === 'approve') : first;
  return {
    result: resultOf(last, returnUrlOf(session)),
    sentOn: () => {
      first.sentOn();
      if (last !== first) last.sentOn();
    },
  };
}

function resultOf({ outcome }: PayerStep, returnUrl: string): PayResult {
  return {
    outcome: outcome.kind,
    message: outcome.kind === 'declined' ? outcome.message : null,
    returnUrl: outcome.kind === 'paid' ? returnUrl : null,
  };
}
