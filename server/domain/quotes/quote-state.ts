import type { StateMachine } from '#domain/state-machine';
import type { ClinicDate } from '#domain/time/index';

export type QuoteState = 'draft' | 'issued' | 'accepted' | 'lapsed' | 'withdrawn';

/**
 * The life of a quote. An issued or lapsed one may be issued anew as its next version; what was accepted became a course
 * and changes only by amendments; what was withdrawn stays so, a new quote is made instead.
 */
export const QUOTE: StateMachine<QuoteState> = {
  of: 'quote',
  follows: {
    draft: ['issued', 'withdrawn'],
    issued: ['issued', 'accepted', 'lapsed', 'withdrawn'],
    lapsed: ['issued', 'withdrawn'],
    accepted: [],
    withdrawn: [],
  },
};

/** An issued quote lapses by its date alone; whether the stored state already says so does not matter. */
export function stateOn(state: QuoteState, validUntil: ClinicDate | null, day: ClinicDate): QuoteState {
  return state === 'issued' && validUntil !== null && validUntil < day ? 'lapsed' : state;
}
