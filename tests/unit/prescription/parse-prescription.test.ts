import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  formatPrescription,
  type Prescription,
  type PrescriptionCode,
  parsePrescription,
  parsePrescriptionFields,
} from '#domain/prescription/index';
import { anyPrescription } from '#tests/factories/prescriptions';

const AS_TYPED: readonly [
  text: string,
  sphereMd: number,
  cylinderMd: number | null,
  axisDeg: number | null,
][] = [
  ['-2.50/-1.25x90', -2_500, -1_250, 90],
  ['−2.00 −1.50 × 75', -2_000, -1_500, 75],
  ['-2.00 -1.50 x 75', -2_000, -1_500, 75],
  ['+1,00 +1,50 * 80', 1_000, 1_500, 80],
  ['pl', 0, null, null],
  ['plano', 0, null, null],
  ['Plano DS', 0, null, null],
  ['0.00', 0, null, null],
  ['pl -0.75 x 180', 0, -750, 180],
  ['-3.00 DS', -3_000, null, null],
  ['-3.00DS', -3_000, null, null],
  ['-3.00 sph', -3_000, null, null],
  ['-3', -3_000, null, null],
  ['-.75', -750, null, null],
  ['+2.5', 2_500, null, null],
  ['-250 -125 x 90', -2_500, -1_250, 90],
  ['-2.50 DS / -1.25 DC x 90', -2_500, -1_250, 90],
  ['-2.50 -1.25 @ 90°', -2_500, -1_250, 90],
  ['-2.50 -1.25 axis 090', -2_500, -1_250, 90],
  ['-2.50 -1.25 x 0', -2_500, -1_250, 180],
  ['-2.50; -1.25; 90', -2_500, -1_250, 90],
  ['- 2.50 - 1.25 x 5', -2_500, -1_250, 5],
];

describe('a prescription on one line', () => {
  for (const [text, sphereMd, cylinderMd, axisDeg] of AS_TYPED) {
    test(`${text} · as the trade writes it · is read`, () => {
      expect(parsePrescription(text)).toEqual({
        ok: true,
        prescription: { sphereMd, cylinderMd, axisDeg, vertexMm: 12 },
      });
    });
  }
  test('a vertex distance · behind it · is read', () => {
    expect(parsePrescription('-6.00 -1.00 x 10 vd 13')).toMatchObject({ prescription: { vertexMm: 13 } });
    expect(parsePrescription('-6.00 bvd=14mm')).toMatchObject({ prescription: { vertexMm: 14 } });
  });
  test('nothing · is missing · and nonsense is not understood', () => {
    expect(codes(parsePrescription('  '))).toEqual(['sphere missing']);
    expect(codes(parsePrescription('minus two'))).toEqual(['sphere not_understood']);
    expect(codes(parsePrescription('-2.00 -1.50 75 3 4'))).toEqual(['sphere not_understood']);
  });
  test('what we write · in either form · is read back', () => {
    fc.assert(
      fc.property(anyPrescription, (prescription) => {
        const text = formatPrescription(prescription);
        const { vertexMm } = prescription;
        const read = parsePrescription(`${text} vd ${vertexMm}`);
        const zero = prescription.cylinderMd === 0;
        expect(read).toEqual({
          ok: true,
          prescription: zero ? { ...prescription, cylinderMd: null, axisDeg: null } : prescription,
        });
      }),
    );
  });
});

const FIELDS = { sphere: '-2.00', cylinder: '-1.50', axis: '75', vertex: '' };

const REFUSED: readonly [what: string, fields: Partial<typeof FIELDS>, codes: string[]][] = [
  ['no sphere', { sphere: '' }, ['sphere missing']],
  ['a sphere without a sign', { sphere: '2.00' }, ['sphere sign_missing']],
  ['a cylinder without a sign', { cylinder: '1.50' }, ['cylinder sign_missing']],
  ['a sphere of 30.25', { sphere: '-30.25' }, ['sphere out_of_range']],
  ['a cylinder of 12.25', { cylinder: '+12.25' }, ['cylinder out_of_range']],
  ['a step of 0.10', { sphere: '-2.10' }, ['sphere not_a_quarter']],
  ['an eighth', { cylinder: '-1.125' }, ['cylinder not_a_quarter']],
  ['an axis of 181', { axis: '181' }, ['axis out_of_range']],
  ['an axis with a fraction', { axis: '7.5' }, ['axis not_understood']],
  ['a cylinder without an axis', { axis: '' }, ['axis axis_missing']],
  ['an axis without a cylinder', { cylinder: '' }, ['axis axis_without_cylinder']],
  ['a vertex of 25 mm', { vertex: '25' }, ['vertex out_of_range']],
  ['a vertex in words', { vertex: 'twelve' }, ['vertex not_understood']],
  ['a sphere in words', { sphere: 'some' }, ['sphere not_understood']],
  ['two faults', { sphere: '', axis: 'x' }, ['sphere missing']],
  [
    'two unreadable fields',
    { sphere: 'a', cylinder: 'b' },
    ['sphere not_understood', 'cylinder not_understood'],
  ],
];

describe('separate fields', () => {
  test('thirty dioptres and twelve of cylinder · at the limit · are read', () => {
    expect(parsePrescriptionFields({ ...FIELDS, sphere: '-30.00', cylinder: '+12.00' }).ok).toBe(true);
  });
  test('a cylinder of zero · with or without an axis · is a case of its own', () => {
    const read = parsePrescriptionFields({ ...FIELDS, cylinder: '0.00', axis: '' });
    expect(read).toMatchObject({ ok: true, prescription: { cylinderMd: 0, axisDeg: null } });
    expect(parsePrescriptionFields({ ...FIELDS, cylinder: '0' }).ok).toBe(true);
  });
  for (const [what, fields, expected] of REFUSED) {
    test(`${what} · is refused · and says what to change`, () => {
      const result = parsePrescriptionFields({ ...FIELDS, ...fields });
      expect(codes(result)).toEqual(expected);
      if (!result.ok) for (const { words, change } of result.refusals) expect(words && change).toBeTruthy();
    });
  }
  test('a power between two quarters · is refused · with both neighbours', () => {
    const result = parsePrescriptionFields({ ...FIELDS, sphere: '-2.10' });
    expect(result).toMatchObject({ refusals: [{ change: 'Give −2.25 or −2.00.' }] });
  });
});

function codes(
  result:
    | { ok: true; prescription: Prescription }
    | { ok: false; refusals: readonly { field: string; code: PrescriptionCode }[] },
): string[] {
  return result.ok ? [] : result.refusals.map(({ field, code }) => `${field} ${code}`);
}
