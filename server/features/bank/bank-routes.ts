import { getPayout, listPayouts, pullPayouts as pullPayoutsContract } from '#contract/bank';
import { ProcessorError } from '#server/gateways/index';
import { type BoundRoute, route } from '#server/http/route';
import { notFound, Problem } from '#server/platform/problem';
import { readClearing, readPayout, readPayoutLines, readPayouts } from './payouts-read.ts';
import type { BankDeps } from './pull-movements.ts';
import { pullPayouts } from './pull-payouts.ts';

export function bankRoutes(deps: BankDeps): BoundRoute[] {
  return [
    route(listPayouts, async () => ({
      payouts: await readPayouts(deps.db),
      ...(await readClearing(deps.db)),
    })),
    route(getPayout, async ({ params }) => {
      const payout = await readPayout(deps.db, params.payoutId);
      if (!payout) throw notFound('payout');
      return { payout, lines: await readPayoutLines(deps.db, payout.payoutId) };
    }),
    route(pullPayoutsContract, async () => {
      try {
        return { tied: await pullPayouts(deps) };
      } catch (error) {
        if (!(error instanceof ProcessorError)) throw error;
        throw new Problem('unavailable', {
          reason: 'processor_silent',
          detail:
            'The card partner does not answer just now. Nothing was lost; the house asks again by itself.',
          retryAfter: 10,
        });
      }
    }),
  ];
}
