import { formatPower } from './format-prescription.ts';
import {
  CYLINDER_LIMIT_MD,
  POWER_STEP_MD,
  type Prescription,
  SPHERE_LIMIT_MD,
  VERTEX_LIMIT_MM,
} from './prescription.ts';

export type PrescriptionField = 'sphere' | 'cylinder' | 'axis' | 'vertex';

export type PrescriptionCode =
  | 'missing'
  | 'not_understood'
  | 'sign_missing'
  | 'out_of_range'
  | 'not_a_quarter'
  | 'axis_missing'
  | 'axis_without_cylinder';

/** Why a prescription cannot be used: which field, what is wrong, what to change. */
export interface PrescriptionRefusal {
  readonly field: PrescriptionField;
  readonly code: PrescriptionCode;
  readonly words: string;
  readonly change: string;
}

/** Everything wrong with a prescription; an empty list when it can be priced. */
export function checkPrescription(prescription: Prescription): PrescriptionRefusal[] {
  const refusals: PrescriptionRefusal[] = [];
  const { sphereMd, cylinderMd, axisDeg, vertexMm } = prescription;
  checkPower('sphere', sphereMd, SPHERE_LIMIT_MD, refusals);
  if (cylinderMd !== null) checkPower('cylinder', cylinderMd, CYLINDER_LIMIT_MD, refusals);
  checkAxis(cylinderMd, axisDeg, refusals);
  if (!Number.isInteger(vertexMm) || vertexMm < 0 || vertexMm > VERTEX_LIMIT_MM) {
    refusals.push({
      field: 'vertex',
      code: 'out_of_range',
      words: `A vertex distance of ${vertexMm} mm is not possible.`,
      change: `Give whole millimetres from 0 to ${VERTEX_LIMIT_MM}; 12 is usual.`,
    });
  }
  return refusals;
}

function checkPower(
  field: 'sphere' | 'cylinder',
  powerMd: number,
  limitMd: number,
  refusals: PrescriptionRefusal[],
): void {
  if (!Number.isInteger(powerMd)) {
    refusals.push({
      field,
      code: 'not_understood',
      words: `The ${field} is not a power.`,
      change: 'Give it in dioptres, such as −2.50.',
    });
  } else if (Math.abs(powerMd) > limitMd) {
    refusals.push({
      field,
      code: 'out_of_range',
      words: `A ${field} of ${formatPower(powerMd)} D is beyond ${limitMd / 1000} D.`,
      change: `Give a ${field} between ${formatPower(-limitMd)} and ${formatPower(limitMd)}.`,
    });
  } else if (powerMd % POWER_STEP_MD !== 0) {
    const below = Math.floor(powerMd / POWER_STEP_MD) * POWER_STEP_MD;
    refusals.push({
      field,
      code: 'not_a_quarter',
      words: `A ${field} of ${formatPower(powerMd)} D is not a step of 0.25 D.`,
      change: `Give ${formatPower(below)} or ${formatPower(below + POWER_STEP_MD)}.`,
    });
  }
}

function checkAxis(cylinderMd: number | null, axisDeg: number | null, refusals: PrescriptionRefusal[]): void {
  const hasCylinder = cylinderMd !== null && cylinderMd !== 0;
  if (hasCylinder && axisDeg === null) {
    refusals.push({
      field: 'axis',
      code: 'axis_missing',
      words: 'The cylinder has no axis.',
      change: 'Give the axis in degrees, 1 to 180.',
    });
    return;
  }
  if (axisDeg === null) return;
  if (cylinderMd === null) {
    refusals.push({
      field: 'axis',
      code: 'axis_without_cylinder',
      words: 'There is an axis but no cylinder.',
      change: 'Give the cylinder, or clear the axis.',
    });
  } else if (!Number.isInteger(axisDeg) || axisDeg < 1 || axisDeg > 180) {
    refusals.push({
      field: 'axis',
      code: 'out_of_range',
      words: `An axis of ${axisDeg} is not on the dial.`,
      change: 'Give whole degrees from 1 to 180.',
    });
  }
}
