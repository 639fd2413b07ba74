import type { Prescription } from './prescription.ts';

const MINUS = '\u2212';

/** A power with its sign and at least two decimals: "−2.50", "+1.25", "0.00", "−3.375". */
export function formatPower(powerMd: number): string {
  const sign = powerMd < 0 ? MINUS : powerMd > 0 ? '+' : '';
  return sign + formatDioptres(Math.abs(powerMd));
}

/** A size without a sign: "1.50", "0.125". */
export function formatDioptres(sizeMd: number): string {
  const thousandths = String(sizeMd % 1000).padStart(3, '0');
  const decimals = thousandths.endsWith('0') ? thousandths.slice(0, 2) : thousandths;
  return `${Math.trunc(sizeMd / 1000)}.${decimals}`;
}

/**
 * A prescription on one line, as typed: "−2.00 −1.50 × 75", "plano −0.75 × 180", "−2.00 DS".
 * Transpose it first to echo the other form.
 */
export function formatPrescription(
  prescription: Pick<Prescription, 'sphereMd' | 'cylinderMd' | 'axisDeg'>,
): string {
  const { sphereMd, cylinderMd, axisDeg } = prescription;
  const sphere = sphereMd === 0 ? 'plano' : formatPower(sphereMd);
  if (cylinderMd === null || cylinderMd === 0) return sphereMd === 0 ? sphere : `${sphere} DS`;
  return `${sphere} ${formatPower(cylinderMd)} \u00d7 ${axisDeg ?? '?'}`;
}
