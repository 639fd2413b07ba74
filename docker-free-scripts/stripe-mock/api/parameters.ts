import { ParameterError } from './errors.ts';

/**
 * Reads request parameters. Form bodies and queries hold texts only; a reader turns one into what the published
 * schema says it is, or refuses it with the parameter's bracketed name. An absent parameter is `undefined`.
 */
export type Reader<T> = (raw: unknown, param: string) => T;

export type Shape = Readonly<Record<string, Reader<unknown>>>;
export type Read<S extends Shape> = { readonly [K in keyof S]: ReturnType<S[K]> };

/** Reads an object and refuses members its schema does not know. */
export function readShape<S extends Shape>(raw: unknown, shape: S, param = ''): Read<S> {
  const members = asRecord(raw ?? {}, param);
  const nameOf = (member: string) => (param === '' ? member : `${param}[${member}]`);
  for (const member of Object.keys(members)) {
    if (!Object.hasOwn(shape, member)) {
      throw new ParameterError(
        nameOf(member),
        'parameter_unknown',
        `Received unknown parameter: ${nameOf(member)}`,
      );
    }
  }
  const entries = Object.entries(shape).map(([member, reader]) => [
    member,
    reader(members[member], nameOf(member)),
  ]);
  return Object.fromEntries(entries) as Read<S>;
}

export function object<S extends Shape>(shape: S): Reader<Read<S> | undefined> {
  return (raw, param) => (raw === undefined ? undefined : readShape(raw, shape, param));
}

export function listOf<T>(item: Reader<T>): Reader<T[] | undefined> {
  return (raw, param) => {
    if (raw === undefined) return undefined;
    // Beyond a limit the form parser hands an indexed list over as an object with numbers for names.
    const items = Array.isArray(raw) ? raw : Object.values(asRecord(raw, param));
    return items.map((value, index) => item(value, `${param}[${index}]`));
  };
}

export function required<T>(reader: Reader<T | undefined>): Reader<T> {
  return (raw, param) => {
    const value = reader(raw, param);
    if (value === undefined) {
      throw new ParameterError(param, 'parameter_missing', `Missing required param: ${param}.`);
    }
    return value;
  };
}

/** @param most greatest number of characters */
export function text(most = 5_000): Reader<string | undefined> {
  return (raw, param) => {
    if (raw === undefined) return undefined;
    if (typeof raw !== 'string')
      throw new ParameterError(param, 'parameter_invalid', `Invalid string: ${param}`);
    if (raw === '') {
      throw new ParameterError(
        param,
        'parameter_invalid_empty',
        `You passed an empty string for '${param}'. We assume empty values are an attempt to unset a parameter; however '${param}' cannot be unset.`,
      );
    }
    if (raw.length > most) {
      throw new ParameterError(
        param,
        'parameter_invalid_string_length',
        `Invalid string: ${param} must be at most ${most} characters`,
      );
    }
    return raw;
  };
}

/** A text that may be sent empty, which unsets it. */
export function clearableText(): Reader<string | undefined> {
  return (raw, param) => (raw === '' ? '' : text()(raw, param));
}

export function oneOf<const T extends string>(...values: readonly T[]): Reader<T | undefined> {
  return (raw, param) => {
    const value = text()(raw, param);
    if (value === undefined) return undefined;
    const known = values.find((candidate) => candidate === value);
    if (known === undefined) {
      throw new ParameterError(
        param,
        'parameter_invalid',
        `Invalid ${param}: must be one of ${values.join(', ')}; you passed ${value}`,
      );
    }
    return known;
  };
}

export function integer({
  least = Number.MIN_SAFE_INTEGER,
  most = Number.MAX_SAFE_INTEGER,
} = {}): Reader<number | undefined> {
  return (raw, param) => {
    const value = text()(raw, param);
    if (value === undefined) return undefined;
    const number = /^-?\d{1,16}$/.test(value) ? Number(value) : Number.NaN;
    if (!Number.isSafeInteger(number)) {
      throw new ParameterError(param, 'parameter_invalid_integer', `Invalid integer: ${value}`);
    }
    if (number < least || number > most) {
      throw new ParameterError(
        param,
        'parameter_invalid_integer',
        `Invalid integer: ${param} must be ${number < least ? `at least ${least}` : `at most ${most}`}`,
      );
    }
    return number;
  };
}

export function boolean(): Reader<boolean | undefined> {
  return (raw, param) => {
    if (raw === undefined) return undefined;
    if (raw !== 'true' && raw !== 'false') {
      throw new ParameterError(param, 'parameter_invalid', `Invalid boolean: ${String(raw)}`);
    }
    return raw === 'true';
  };
}

const MOST_METADATA = 50;
const METADATA_KEY = 40;
const METADATA_VALUE = 500;

export type MetadataChange = { readonly clear: boolean; readonly values: Readonly<Record<string, string>> };

/** Metadata as sent: an empty text in its place clears all, an empty value unsets one key. */
export function metadata(): Reader<MetadataChange> {
  return (raw, param) => {
    if (raw === undefined) return { clear: false, values: {} };
    if (raw === '') return { clear: true, values: {} };
    const entries = Object.entries(asRecord(raw, param));
    for (const [key, value] of entries) {
      if (typeof value !== 'string' || value.length > METADATA_VALUE || key.length > METADATA_KEY) {
        throw new ParameterError(
          `${param}[${key}]`,
          'parameter_invalid_string_length',
          `Metadata keys have at most ${METADATA_KEY} characters and values at most ${METADATA_VALUE}: ${param}[${key}]`,
        );
      }
    }
    if (entries.length > MOST_METADATA) {
      throw new ParameterError(
        param,
        'parameter_invalid',
        `Metadata can have at most ${MOST_METADATA} keys.`,
      );
    }
    return { clear: false, values: Object.fromEntries(entries) as Record<string, string> };
  };
}

export function mergeMetadata(
  old: Readonly<Record<string, string>>,
  change: MetadataChange,
): Record<string, string> {
  const merged = { ...(change.clear ? {} : old), ...change.values };
  return Object.fromEntries(Object.entries(merged).filter(([, value]) => value !== ''));
}

export type TimeRange = { readonly least: number; readonly most: number };

/** `created` and its like: one second, or bounds gt, gte, lt, lte. */
export function timeRange(): Reader<TimeRange | undefined> {
  return (raw, param) => {
    if (raw === undefined) return undefined;
    if (typeof raw === 'string') {
      const at = integer()(raw, param) ?? 0;
      return { least: at, most: at };
    }
    const { gt, gte, lt, lte } = readShape(
      raw,
      { gt: integer(), gte: integer(), lt: integer(), lte: integer() },
      param,
    );
    return {
      least: Math.max(gte ?? Number.NEGATIVE_INFINITY, gt === undefined ? Number.NEGATIVE_INFINITY : gt + 1),
      most: Math.min(lte ?? Number.POSITIVE_INFINITY, lt === undefined ? Number.POSITIVE_INFINITY : lt - 1),
    };
  };
}

export function within(range: TimeRange | undefined, at: number): boolean {
  return range === undefined || (at >= range.least && at <= range.most);
}

function asRecord(raw: unknown, param: string): Record<string, unknown> {
  if (typeof raw !== 'object' || raw === null || Array.isArray(raw)) {
    throw new ParameterError(param, 'parameter_invalid', `Invalid object: ${param}`);
  }
  return raw as Record<string, unknown>;
}
