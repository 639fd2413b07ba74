import type { CardEntry, PaymentOutcome } from '#stand-ins/stripe-mock/objects/payments';
import { answerAuthentication, confirmPayment } from '#stand-ins/stripe-mock/objects/payments';
import type { Service } from '#stand-ins/stripe-mock/service';
import { settingsOf } from '#stand-ins/stripe-mock/service';
import type { SessionRecord } from '#stand-ins/stripe-mock/state/records';
import { release } from '#stand-ins/stripe-mock/webhooks/deliveries';

/** The payer is not kept longer than this for a receiver that does not answer. */
const LONGEST_WAIT_MS = 10_000;

export interface PayerStep {
  readonly outcome: PaymentOutcome;
  /** To be called when the answer has left, which is when the payer is on the way back. */
  readonly sentOn: () => void;
}

/** What both the hosted page and the control port do when a payer presses a button. */
export class PayerDesk {
  readonly #service: Service;
  readonly #idle: () => Promise<void>;

  /** @param idle resolves when all that is due has been done and told */
  constructor(service: Service, idle: () => Promise<void>) {
    this.#service = service;
    this.#idle = idle;
  }

  confirm(sessionId: string, entry: CardEntry): Promise<PayerStep> {
    return this.#step(() => confirmPayment(this.#service, sessionId, entry));
  }

  answer(sessionId: string, approved: boolean): Promise<PayerStep> {
    return this.#step(() => answerAuthentication(this.#service, sessionId, approved));
  }

  async #step(work: () => PaymentOutcome): Promise<PayerStep> {
    if (settingsOf(this.#service).redirect === 'before_webhook') return this.#stepAheadOfNews(work);
    const outcome = work();
    const patience = new Promise((resolve) => setTimeout(resolve, LONGEST_WAIT_MS).unref());
    if (outcome.kind === 'paid') await Promise.race([this.#idle(), patience]);
    return { outcome, sentOn: () => {} };
  }

  #stepAheadOfNews(work: () => PaymentOutcome): PayerStep {
    this.#service.payersUnderway += 1;
    try {
      return { outcome: work(), sentOn: () => this.#sentOn() };
    } catch (error) {
      this.#sentOn();
      throw error;
    }
  }

  #sentOn(): void {
    this.#service.payersUnderway -= 1;
    if (this.#service.payersUnderway === 0) release(this.#service, ({ hold }) => hold === 'until_redirected');
  }
}

export function returnUrlOf(session: SessionRecord): string {
  return session.successUrl.replaceAll('{CHECKOUT_SESSION_ID}', session.id);
}
