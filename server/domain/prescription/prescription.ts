/**
 * A refraction of one eye as it was typed, in either cylinder sign.
 * Powers are whole milli-dioptres (−2.50 D is −2500), the axis whole degrees, the vertex distance whole millimetres.
 */
export interface Prescription {
  readonly sphereMd: number;
  /** null: written as a sphere alone ("DS"); 0 is a cylinder typed as zero. */
  readonly cylinderMd: number | null;
  /** 1–180 with a cylinder, null without. */
  readonly axisDeg: number | null;
  readonly vertexMm: number;
}

/** The one form that bands look at: cylinder zero or minus, axis only with a cylinder. */
export interface MinusForm {
  readonly sphereMd: number;
  readonly cylinderMd: number;
  readonly axisDeg: number | null;
}

/** Distance of the trial lens from the cornea when nothing else is said. */
export const DEFAULT_VERTEX_MM = 12;

/** Powers are prescribed in quarters of a dioptre (common practice). */
export const POWER_STEP_MD = 250;
export const SPHERE_LIMIT_MD = 30_000;
export const CYLINDER_LIMIT_MD = 12_000;
export const VERTEX_LIMIT_MM = 20;

/** Axis turned by a quarter turn, within 1–180. */
function crossAxis(axisDeg: number): number {
  return axisDeg > 90 ? axisDeg - 90 : axisDeg + 90;
}

/**
 * The same lens written in the other cylinder sign: sphere S + C, cylinder −C, axis ± 90.
 * A sphere alone is its own other form.
 */
export function transpose(prescription: Prescription): Prescription {
  const { sphereMd, cylinderMd, axisDeg, vertexMm } = prescription;
  if (cylinderMd === null || cylinderMd === 0 || axisDeg === null) return prescription;
  return {
    sphereMd: sphereMd + cylinderMd,
    cylinderMd: -cylinderMd,
    axisDeg: crossAxis(axisDeg),
    vertexMm,
  };
}

/** The minus-cylinder form, whichever way the prescription was typed. */
export function minusForm(prescription: Prescription): MinusForm {
  const cylinderMd = prescription.cylinderMd ?? 0;
  if (cylinderMd === 0) return { sphereMd: prescription.sphereMd, cylinderMd: 0, axisDeg: null };
  const { sphereMd, axisDeg } = cylinderMd > 0 ? transpose(prescription) : prescription;
  return { sphereMd, cylinderMd: -Math.abs(cylinderMd), axisDeg };
}

/** S + C/2 in milli-dioptres; a cylinder step of 0.25 D gives 0.125 D. */
export function sphericalEquivalentMd(prescription: Pick<Prescription, 'sphereMd' | 'cylinderMd'>): number {
  return prescription.sphereMd + (prescription.cylinderMd ?? 0) / 2;
}

/**
 * The stronger of the two meridians with its sign: S or S + C, whichever is larger in size.
 * Of two equal ones with opposite signs it is the minus one, so that notation does not matter.
 */
export function strongestMeridianMd(prescription: Pick<Prescription, 'sphereMd' | 'cylinderMd'>): number {
  const flat = prescription.sphereMd;
  const steep = flat + (prescription.cylinderMd ?? 0);
  if (steep === -flat) return -Math.abs(flat) || 0;
  return Math.abs(steep) > Math.abs(flat) ? steep : flat;
}

/**
 * A power moved from the spectacle plane to the cornea: F / (1 − dF), halves away from zero.
 * Each meridian is moved by itself.
 *
 * @param powerMd power at the vertex distance, milli-dioptres
 * @param vertexMm distance in millimetres
 * @throws RangeError where the lens would focus on the cornea (dF = 1)
 */
export function atCorneaMd(powerMd: number, vertexMm: number): number {
  const denominator = 1_000_000 - vertexMm * powerMd;
  if (denominator === 0) throw new RangeError('A lens that focuses on the cornea has no power there');
  const exact = (powerMd * 1_000_000) / denominator;
  return Math.sign(exact) * Math.round(Math.abs(exact)) || 0;
}

/** A prescription moved to the cornea, both meridians, in the sign it was typed in. */
export function prescriptionAtCornea(prescription: Prescription): Prescription {
  const { sphereMd, cylinderMd, axisDeg, vertexMm } = prescription;
  const sphere = atCorneaMd(sphereMd, vertexMm);
  if (cylinderMd === null) return { sphereMd: sphere, cylinderMd, axisDeg, vertexMm: 0 };
  const other = atCorneaMd(sphereMd + cylinderMd, vertexMm);
  return { sphereMd: sphere, cylinderMd: other - sphere, axisDeg, vertexMm: 0 };
}
