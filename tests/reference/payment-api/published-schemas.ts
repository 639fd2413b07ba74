import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { Ajv2020, type ValidateFunction } from 'ajv/dist/2020.js';

/**
 * Source: JSON Schema derived from the declarations of the official SDK (MIT), kept beside the repository and
 * not in it. Expandable members are cut to `id` and `object`; objects found there are checked by themselves.
 */
const ROOT = fileURLToPath(new URL('../../..', import.meta.url));
const FOLDER = process.env.TENDERLIGHT_SHARED_DATA ?? join(ROOT, '../shared/data');
const FILE = join(FOLDER, 'payment-api/schemas.json');

export interface PublishedSchemas {
  /** Version of the SDK the schemas were derived from. */
  readonly version: string;
  readonly apiVersion: string;
  /** What is wrong with an answer or event and with every object inside it; nothing when it is as published. */
  problemsOf(answer: unknown): string[];
  /** How many objects have been checked so far, by the name of their kind. */
  readonly checked: ReadonlyMap<string, number>;
}

interface SchemaFile {
  readonly $id: string;
  readonly 'x-source': { readonly version: string; readonly apiVersion: string };
  readonly $defs: Readonly<Record<string, object>>;
}

export const ABSENT = `Published schemas are not checked: there is no ${FILE}`;

/** The published schemas, or null where they are not at hand. */
export function loadPublishedSchemas(): PublishedSchemas | null {
  if (!existsSync(FILE)) return null;
  const file = JSON.parse(readFileSync(FILE, 'utf8')) as SchemaFile;
  const ajv = new Ajv2020({ strict: false, allErrors: true });
  ajv.addSchema(file);
  const checked = new Map<string, number>();
  const validator = (name: string): ValidateFunction | undefined =>
    Object.hasOwn(file.$defs, name) ? ajv.getSchema(`${file.$id}#/$defs/${name}`) : undefined;

  const check = (name: string, value: unknown): string[] => {
    const validate = validator(name);
    if (validate === undefined) return [];
    checked.set(name, (checked.get(name) ?? 0) + 1);
    if (validate(value)) return [];
    return (validate.errors ?? []).map((error) => `${name}${error.instancePath} ${error.message}`);
  };
  const problemsOf = (value: unknown): string[] => {
    if (Array.isArray(value)) return value.flatMap(problemsOf);
    if (typeof value !== 'object' || value === null) return [];
    const kind = 'error' in value && !('object' in value) ? 'error' : (value as { object?: unknown }).object;
    const own = typeof kind === 'string' ? check(kind, value) : [];
    return [...own, ...Object.values(value).flatMap(problemsOf)];
  };
  return {
    version: file['x-source'].version,
    apiVersion: file['x-source'].apiVersion,
    problemsOf,
    checked,
  };
}
