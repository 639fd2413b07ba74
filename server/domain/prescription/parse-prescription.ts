import { checkPrescription, type PrescriptionField, type PrescriptionRefusal } from './check-prescription.ts';
import { DEFAULT_VERTEX_MM, type Prescription } from './prescription.ts';

export type ParsedPrescription =
  | { readonly ok: true; readonly prescription: Prescription }
  | { readonly ok: false; readonly refusals: readonly PrescriptionRefusal[] };

/** The four fields of a form, as typed; an empty text is a field left empty. */
export interface PrescriptionFields {
  readonly sphere: string;
  readonly cylinder: string;
  readonly axis: string;
  readonly vertex: string;
}

/**
 * Reads a prescription typed into separate fields.
 * "pl", "plano" and "0" are zero; "DS", "sph" and an empty cylinder are no cylinder; an axis of 0 is 180.
 */
export function parsePrescriptionFields(fields: PrescriptionFields): ParsedPrescription {
  const refusals: PrescriptionRefusal[] = [];
  const sphereMd = readSphere(tidy(fields.sphere), refusals);
  const cylinderMd = readCylinder(tidy(fields.cylinder), refusals);
  const axisDeg = readAxis(tidy(fields.axis), refusals);
  const vertexMm = readVertex(tidy(fields.vertex), refusals);
  if (refusals.length > 0) return { ok: false, refusals };
  const prescription: Prescription = { sphereMd, cylinderMd, axisDeg, vertexMm };
  const faults = checkPrescription(prescription);
  return faults.length === 0 ? { ok: true, prescription } : { ok: false, refusals: faults };
}

const POWER = String.raw`[+-]?\s*\d+(?:\.\d+)?|[+-]?\.\d+|pl(?:ano)?`;
const LINE = new RegExp(
  String.raw`^(${POWER})\s*(?:d?s(?:ph)?)?(?:[\s/,;]*(?:(${POWER}|ds|sph)\s*(?:dc|cyl)?)(?:[\s/,;]*(?:x|@|ax(?:is)?)?\s*(\d+)\s*°?)?)?(?:[\s/,;]+(?:v|vd|bvd|vertex)\s*=?\s*(\d+)\s*(?:mm)?)?$`,
);

/**
 * Reads a whole prescription from one line: "-2.50/-1.25x90", "pl -0.75 x 180", "−2.00 DS", "+1,00 −1.50 × 75 vd 13".
 */
export function parsePrescription(text: string): ParsedPrescription {
  const match = LINE.exec(tidy(text));
  if (!match) {
    return refuse(
      text.trim() === '' ? 'missing' : 'not_understood',
      text.trim() === ''
        ? 'There is no prescription yet.'
        : `"${text.trim()}" does not read as a prescription.`,
    );
  }
  const [, sphere = '', cylinder = '', axis = '', vertex = ''] = match;
  return parsePrescriptionFields({ sphere, cylinder, axis, vertex });
}

function refuse(code: 'missing' | 'not_understood', words: string): ParsedPrescription {
  const change = 'Write sphere, cylinder and axis, such as −2.50 −1.25 × 90, or −2.50 DS.';
  return { ok: false, refusals: [{ field: 'sphere', code, words, change }] };
}

/** One spelling for the minus signs, crosses, commas and capitals people type. */
function tidy(text: string): string {
  return text
    .trim()
    .toLowerCase()
    .replace(/[\u2212\u2013\u2014\ufe63\uff0d]/g, '-')
    .replace(/[\u00d7\u2715\u2716*]/g, 'x')
    .replace(/(\d),(\d)/g, '$1.$2')
    .replace(/[\u00a0\u2009\u202f]/g, ' ');
}

/** Milli-dioptres of a signed power; null when it does not read as one. "-250" is read as −2.50, as the trade types it. */
function readPowerMd(text: string): number | 'sign_missing' | null {
  if (/^pl(ano)?$/.test(text)) return 0;
  const match = /^([+-]?)\s*(\d*)(?:\.(\d{1,3}))?$/.exec(text.replace(/\s*d$/, ''));
  if (!match) return null;
  const [, sign = '', whole = '', fraction] = match;
  if (whole === '' && fraction === undefined) return null;
  const shorthand = fraction === undefined && /^[1-9]\d{2,3}$/.test(whole);
  const size = shorthand
    ? Number.parseInt(whole, 10) * 10
    : Number.parseInt(whole || '0', 10) * 1000 + Number.parseInt((fraction ?? '').padEnd(3, '0'), 10);
  if (size !== 0 && sign === '') return 'sign_missing';
  return sign === '-' ? -size || 0 : size;
}

function readPower(field: 'sphere' | 'cylinder', text: string, refusals: PrescriptionRefusal[]): number {
  const power = readPowerMd(text);
  if (typeof power === 'number') return power;
  refusals.push(
    power === 'sign_missing'
      ? {
          field,
          code: 'sign_missing',
          words: `The ${field} has no sign.`,
          change: `Write +${text} or \u2212${text}.`,
        }
      : notUnderstood(field, text, 'Write it in dioptres with its sign, such as \u22122.50.'),
  );
  return 0;
}

function readSphere(text: string, refusals: PrescriptionRefusal[]): number {
  if (text === '') {
    refusals.push({
      field: 'sphere',
      code: 'missing',
      words: 'The sphere is missing.',
      change: 'Write the sphere, or "pl" for plano.',
    });
    return 0;
  }
  return readPower('sphere', text.replace(/\s*(?:ds|sph)$/, ''), refusals);
}

function readCylinder(text: string, refusals: PrescriptionRefusal[]): number | null {
  if (text === '' || /^(?:ds|sph|-+)$/.test(text)) return null;
  return readPower('cylinder', text.replace(/\s*(?:dc|cyl)$/, ''), refusals);
}

function readAxis(text: string, refusals: PrescriptionRefusal[]): number | null {
  const bare = text.replace(/^(?:x|@|ax(?:is)?)\s*/, '').replace(/\s*(?:°|deg)$/, '');
  if (bare === '' || /^-+$/.test(bare)) return null;
  if (!/^\d{1,4}$/.test(bare)) {
    refusals.push(notUnderstood('axis', text, 'Write whole degrees from 1 to 180.'));
    return null;
  }
  const degrees = Number.parseInt(bare, 10);
  return degrees === 0 ? 180 : degrees;
}

function readVertex(text: string, refusals: PrescriptionRefusal[]): number {
  const bare = text.replace(/\s*mm$/, '');
  if (bare === '') return DEFAULT_VERTEX_MM;
  if (/^\d{1,3}$/.test(bare)) return Number.parseInt(bare, 10);
  refusals.push(notUnderstood('vertex', text, 'Write whole millimetres; 12 is usual.'));
  return DEFAULT_VERTEX_MM;
}

function notUnderstood(field: PrescriptionField, text: string, change: string): PrescriptionRefusal {
  return { field, code: 'not_understood', words: `"${text}" does not read as ${article(field)}.`, change };
}

function article(field: PrescriptionField): string {
  return field === 'axis' ? 'an axis' : field === 'vertex' ? 'a vertex distance' : `a ${field}`;
}
