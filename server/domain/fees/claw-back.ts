import type { Derivation } from '#domain/derivation';
import { applyRate, greatest, least, type Minor, negate, scale, subtract, ZERO } from '#domain/money/index';
import { formatRate } from '#domain/pricing/index';
import type { ClawbackRule } from './accrue-fee.ts';

/** The accrual a clawback belongs to, as it was posted. */
export interface AccruedFee {
  readonly feeMinor: Minor;
  readonly clawback: ClawbackRule;
  readonly versionNo: number;
}

/**
 * What of an accrued fee goes back when money for its eye does (refund, lost dispute): at the rate and rule version of the
 * accrual, and together never more than it (invariant 17). Counted over all returns so far, so that several small ones
 * take back what one large one would.
 *
 * @param returned everything returned for the eye so far, this time included; tax is what is within it
 * @param clawedBackMinor what went back before, as a positive amount
 */
export function clawBack(
  accrual: AccruedFee,
  returned: { readonly totalMinor: Minor; readonly taxMinor: Minor },
  clawedBackMinor: Minor,
): { readonly amountMinor: Minor; readonly why: Derivation } {
  const { feeMinor, clawback, versionNo } = accrual;
  const net = subtract(returned.totalMinor, returned.taxMinor);
  const soFar =
    clawback.kind === 'rate'
      ? applyRate(net, clawback.rateBp)
      : partOf(feeMinor, returned.totalMinor, clawback.shareMinor);
  const amountMinor = greatest(subtract(least(soFar, feeMinor), clawedBackMinor), ZERO);
  return {
    amountMinor,
    why: {
      title: 'Clawed back',
      steps: [
        { label: 'Fee accrued', amountMinor: feeMinor, version: `agreement version ${versionNo}` },
        clawback.kind === 'rate'
          ? { label: 'Returned without tax', amountMinor: net, text: `at ${formatRate(clawback.rateBp)}` }
          : { label: 'Returned of the eye’s share', amountMinor: returned.totalMinor },
        ...(clawback.kind === 'share'
          ? [{ label: 'Share of the eye', amountMinor: clawback.shareMinor }]
          : []),
        ...(clawedBackMinor > 0
          ? [{ label: 'Clawed back before', amountMinor: negate(clawedBackMinor) }]
          : []),
        { label: 'Clawed back', amountMinor },
      ],
    },
  };
}

function partOf(feeMinor: Minor, returnedMinor: Minor, shareMinor: Minor): Minor {
  return shareMinor > 0 ? scale(feeMinor, returnedMinor, shareMinor) : ZERO;
}
