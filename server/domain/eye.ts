/** One eye, as the chart abbreviates it: OD (oculus dexter) right, OS (oculus sinister) left. */
export type Eye = 'OD' | 'OS';

/** Where a figure stands: in one eye's column, or across both (OU, oculus uterque). */
export type Laterality = Eye | 'OU';

/** Both eyes in the order every screen and rule uses: right first. */
export const EYES: readonly Eye[] = ['OD', 'OS'];

/** The other eye. */
export function otherEye(eye: Eye): Eye {
  return eye === 'OD' ? 'OS' : 'OD';
}
