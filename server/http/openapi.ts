import { z } from 'zod';
import type { Contract } from '#contract/define';
import { PROBLEMS, type ProblemCode, problemSchema } from '#contract/problem';

type Json = Record<string, unknown>;

/** Builds the OpenAPI 3.1 document from the contracts; nothing in it is written by hand. */
export function openApiDocument(
  contracts: readonly Contract[],
  publicUrl: string,
): Json & { openapi: string } {
  const paths: Record<string, Json> = {};
  const components: Components = {};
  components.Problem = jsonSchema(problemSchema, components);
  for (const contract of contracts) {
    const path = contract.path.replace(/:(\w+)/g, '{$1}');
    paths[path] = { ...paths[path], [contract.method]: operationOf(contract, components) };
  }
  return {
    openapi: '3.1.0',
    info: {
      title: 'Tenderlight',
      version: '1',
      description:
        'Sign in with POST /api/session; the answer sets the cookie tl.sid and gives a csrfToken. Every later request that is not GET carries it in the header X-CSRF-Token. Amounts are whole minor units of the currency beside them; days are YYYY-MM-DD at the site; moments are UTC. Errors are application/problem+json (RFC 9457).',
    },
    servers: [{ url: publicUrl }],
    paths,
    components: {
      schemas: components,
      securitySchemes: {
        session: { type: 'apiKey', in: 'cookie', name: 'tl.sid' },
        csrf: { type: 'apiKey', in: 'header', name: 'X-CSRF-Token' },
        patientLink: { type: 'apiKey', in: 'cookie', name: 'tl.link' },
      },
    },
  };
}

function operationOf(contract: Contract, components: Components): Json {
  return {
    operationId: contract.id,
    summary: contract.summary,
    ...(contract.access.kind === 'staff' ? { 'x-roles': contract.access.roles } : {}),
    security: securityOf(contract),
    parameters: [
      ...parametersOf(contract.params, 'path', components),
      ...parametersOf(contract.query, 'query', components),
    ],
    ...bodyOf(contract, components),
    responses: responsesOf(contract, components),
  };
}

function securityOf(contract: Contract): Json[] {
  if (contract.access.kind === 'public') return [];
  if (contract.access.kind === 'patient') return [{ patientLink: [] }];
  return contract.method === 'get' ? [{ session: [] }] : [{ session: [], csrf: [] }];
}

function parametersOf(
  schema: z.ZodObject | undefined,
  place: 'path' | 'query',
  components: Components,
): Json[] {
  if (!schema) return [];
  const object = jsonSchema(schema, components) as { properties?: Record<string, Json>; required?: string[] };
  return Object.entries(object.properties ?? {}).map(([name, property]) => ({
    name,
    in: place,
    required: place === 'path' || (object.required ?? []).includes(name),
    schema: property,
  }));
}

function bodyOf(contract: Contract, components: Components): Json {
  if (!contract.body && !contract.upload) return {};
  if (contract.upload) {
    const properties: Json = { [contract.upload]: { type: 'string', format: 'binary' } };
    if (contract.body) properties.fields = jsonSchema(contract.body, components);
    return {
      requestBody: {
        required: true,
        content: {
          'multipart/form-data': { schema: { type: 'object', properties, required: [contract.upload] } },
        },
      },
    };
  }
  return {
    requestBody: {
      required: true,
      content: { 'application/json': { schema: jsonSchema(contract.body as z.ZodType, components) } },
    },
  };
}

function responsesOf(contract: Contract, components: Components): Json {
  const good =
    contract.status === 204
      ? { description: 'Done' }
      : {
          description: contract.summary,
          content: {
            [contract.produces]: {
              schema:
                contract.produces === 'application/json'
                  ? jsonSchema(contract.response, components)
                  : { type: 'string', contentMediaType: contract.produces },
            },
          },
        };
  const statuses = new Set(expectedProblems(contract).map((code) => PROBLEMS[code].status));
  const problems = [...statuses]
    .sort((a, b) => a - b)
    .map((status) => [
      String(status),
      {
        description: 'See the detail',
        content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } },
      },
    ]);
  return { [String(contract.status)]: good, ...Object.fromEntries(problems) };
}

/** What a contract can answer besides success: its own list and what its kind implies. */
function expectedProblems(contract: Contract): ProblemCode[] {
  const codes: ProblemCode[] = ['internal', ...contract.problems];
  if (contract.access.kind !== 'public') codes.push('not_signed_in');
  if (contract.access.kind === 'staff') codes.push('forbidden');
  if (contract.params || contract.query || contract.body) codes.push('invalid_input', 'bad_request');
  if (contract.params) codes.push('not_found');
  return codes;
}

/** Shapes with a name of their own, gathered while the document is built. */
type Components = Record<string, Json>;

/** The input side: what a caller writes and what goes over the wire. Named shapes go to the components and are referred to. */
function jsonSchema(schema: z.ZodType, components: Components): Json {
  const made = z.toJSONSchema(schema, { io: 'input', unrepresentable: 'any', reused: 'inline' }) as Json;
  const moved = JSON.parse(JSON.stringify(made).replaceAll('#/$defs/', '#/components/schemas/')) as Json;
  const { $schema: _dialect, $defs, ...rest } = moved;
  for (const [name, definition] of Object.entries(($defs ?? {}) as Record<string, Json>))
    components[name] = withoutId(definition);
  return withoutId(rest);
}

function withoutId({ id: _id, $id: _uri, ...rest }: Json): Json {
  return rest;
}
