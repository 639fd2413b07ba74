import fc from 'fast-check';
import { type Prescription, parsePrescription } from '#domain/prescription/index';

/** Any prescription that may be priced, in either sign, spheres alone and zero cylinders among them. */
export const anyPrescription: fc.Arbitrary<Prescription> = fc
  .record({
    sphere: fc.integer({ min: -72, max: 72 }),
    cylinder: fc.option(fc.integer({ min: -48, max: 48 })),
    axisDeg: fc.integer({ min: 1, max: 180 }),
    vertexMm: fc.integer({ min: 0, max: 20 }),
  })
  .map(({ sphere, cylinder, axisDeg, vertexMm }) => ({
    sphereMd: sphere * 250,
    cylinderMd: cylinder === null ? null : cylinder * 250,
    axisDeg: cylinder === null || cylinder === 0 ? null : axisDeg,
    vertexMm,
  }));

/** A prescription from the way people write it; throws when it does not read as one. */
export function rx(text: string): Prescription {
  const read = parsePrescription(text);
  if (!read.ok) throw new RangeError(`${text}: ${read.refusals.map((refusal) => refusal.words).join(' ')}`);
  return read.prescription;
}
