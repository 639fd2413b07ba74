import { add, type Minor, subtract, times, ZERO } from '#domain/money/index';
import type { BandReading, VolumeBand } from './agreement.ts';

/**
 * What a number of eyes earns in a period.
 * marginal: each eye by its band. whole: all of them by the band the last one reached.
 */
export function bandTotal(bands: readonly VolumeBand[], reading: BandReading, eyes: number): Minor {
  const reached = bands.filter(({ fromEye }) => fromEye <= eyes);
  if (reading === 'whole') return times(reached.at(-1)?.perEyeMinor ?? ZERO, eyes);
  return reached.reduce((total, { fromEye, perEyeMinor }, index) => {
    const until = (reached[index + 1]?.fromEye ?? eyes + 1) - 1;
    return add(total, times(perEyeMinor, until - fromEye + 1));
  }, ZERO);
}

/**
 * What the next eye adds. In the whole reading the eye that reaches a band also brings the difference for those before
 * it, so that the fees of a period always add up to the total of its eyes.
 */
export function bandFee(bands: readonly VolumeBand[], reading: BandReading, eyesBefore: number): Minor {
  return subtract(bandTotal(bands, reading, eyesBefore + 1), bandTotal(bands, reading, eyesBefore));
}

/** Which band the next eye falls in: "band from eye 21 on". */
export function bandWords(
  basis: { readonly bands: readonly VolumeBand[]; readonly reading: BandReading },
  eyesBefore: number,
): string {
  const band = basis.bands.filter(({ fromEye }) => fromEye <= eyesBefore + 1).at(-1);
  const from = `band from eye ${band?.fromEye ?? 1} on`;
  if (basis.reading === 'marginal') return from;
  return band && band.fromEye === eyesBefore + 1 && eyesBefore > 0
    ? `${from}, with the difference for the ${eyesBefore} before`
    : `${from}, for every eye`;
}
