import { getProof } from '#contract/proof';
import { currencyCode } from '#domain/money/index';
import { type ClinicDate, dayOf } from '#domain/time/index';
import { type BoundRoute, route } from '#server/http/route';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { inSnapshot } from '#server/platform/transaction';
import { type ProofControl, runControl } from './control.ts';
import { AUDIT_CONTROLS } from './controls/audit-controls.ts';
import { COURSE_CONTROLS } from './controls/course-controls.ts';
import { FEE_CONTROLS } from './controls/fee-controls.ts';
import { LEDGER_CONTROLS } from './controls/ledger-controls.ts';
import { TAKINGS_CONTROLS } from './controls/takings-controls.ts';

/** Every control of the house, in the order Proof shows them. */
export const CONTROLS: readonly ProofControl[] = [
  ...LEDGER_CONTROLS,
  ...COURSE_CONTROLS,
  ...TAKINGS_CONTROLS,
  ...FEE_CONTROLS,
  ...AUDIT_CONTROLS,
];

/** Computes every control as of a day in one consistent snapshot. */
export async function computeProof(deps: Pick<Deps, 'db' | 'clock'>, asOf: ClinicDate | undefined) {
  return await inSnapshot(deps.db, async (trx) => {
    const [clinic] = await rawRows<{ currency: string }>(
      trx,
      'SELECT currency FROM clinics ORDER BY clinic_id LIMIT 1',
    );
    const [latest] = await rawRows<{ day_on: ClinicDate | null }>(
      trx,
      'SELECT MAX(day_on) AS day_on FROM business_days',
    );
    const day = asOf ?? latest?.day_on ?? dayOf(deps.clock.now(), 'UTC');
    const controls = [];
    for (const control of CONTROLS)
      controls.push(await runControl(trx, control, { asOf: day, now: deps.clock.now() }));
    return {
      asOf: day,
      computedAt: deps.clock.now(),
      currency: currencyCode(clinic?.currency ?? 'EUR'),
      tied: controls.every((control) => control.tied),
      controls,
    };
  });
}

export function proofRoutes(deps: Deps): BoundRoute[] {
  return [route(getProof, async ({ query }) => await computeProof(deps, query.asOf))];
}
