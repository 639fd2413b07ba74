import { Ajv2020 } from 'ajv/dist/2020.js';
import formats from 'ajv-formats';
import { Agent } from './agent.ts';

interface Media {
  readonly content?: Readonly<Record<string, unknown>>;
}

interface Operation {
  readonly operationId: string;
  readonly parameters: readonly { readonly name: string; readonly in: string; readonly required: boolean }[];
  readonly requestBody?: Media;
  readonly responses: Readonly<Record<string, Media>>;
}

/** The part of an OpenAPI document a caller reads. */
export interface OpenApiDocument {
  readonly paths: Readonly<Record<string, Readonly<Record<string, Operation>>>>;
}

export interface CallInput {
  readonly path?: Readonly<Record<string, string | number>>;
  readonly query?: Readonly<Record<string, string>>;
  readonly body?: unknown;
}

/** An interface known by its served document alone: everything sent and everything that comes back is held against it. */
export class DocumentedInterface {
  readonly #baseUrl: string;
  readonly #document: OpenApiDocument;
  readonly #ajv = new Ajv2020({ strict: false, allErrors: true });

  constructor(baseUrl: string, document: OpenApiDocument) {
    this.#baseUrl = baseUrl;
    this.#document = document;
    formats.default(this.#ajv);
    this.#ajv.addSchema({ $id: 'document', ...document });
  }

  /** Somebody who has not signed in yet. */
  caller(): DocumentCaller {
    return new DocumentCaller(this, new Agent(this.#baseUrl));
  }

  /** Finds an operation by its id. Throws when the document knows none. */
  operation(id: string): { readonly path: string; readonly method: string; readonly operation: Operation } {
    for (const [path, methods] of Object.entries(this.#document.paths)) {
      for (const [method, operation] of Object.entries(methods))
        if (operation.operationId === id) return { path, method, operation };
    }
    throw new Error(`The document knows no ${id}`);
  }

  /** Holds a value against a schema inside the document; throws with every difference. */
  check(what: string, pointer: readonly string[], value: unknown): void {
    const steps = pointer.map((step) => encodeURIComponent(step.replaceAll('~', '~0').replaceAll('/', '~1')));
    const validate = this.#ajv.getSchema(`document#/${steps.join('/')}`);
    if (!validate) throw new Error(`${what}: the document has no schema at ${pointer.join(' ')}`);
    if (!validate(value)) throw new Error(`${what}: ${this.#ajv.errorsText(validate.errors)}`);
  }
}

/** One person at a documented interface. */
export class DocumentCaller {
  readonly #interface: DocumentedInterface;
  readonly #agent: Agent;

  constructor(documented: DocumentedInterface, agent: Agent) {
    this.#interface = documented;
    this.#agent = agent;
  }

  /** Calls an operation and gives its documented success. Throws on a problem, or where document and server differ. */
  async do<T = Record<string, unknown>>(id: string, input: CallInput = {}): Promise<T> {
    const { path, method, operation } = this.#interface.operation(id);
    const at = ['paths', path, method];
    if ((operation.requestBody === undefined) !== (input.body === undefined))
      throw new Error(`${id}: a body where the document has none, or none where it has one`);
    if (operation.requestBody)
      this.#interface.check(
        `${id} request`,
        [...at, 'requestBody', 'content', 'application/json', 'schema'],
        input.body,
      );
    const answer = await this.#agent.send(
      method.toUpperCase(),
      addressOf(id, path, operation, input),
      input.body,
    );
    if (answer.status >= 300) throw new Error(`${id}: ${answer.status} ${JSON.stringify(answer.body)}`);
    const response = operation.responses[String(answer.status)];
    if (!response) throw new Error(`${id}: the document does not name the status ${answer.status}`);
    const [media] = Object.keys(response.content ?? {});
    if (media === 'application/json')
      this.#interface.check(
        `${id} answer`,
        [...at, 'responses', String(answer.status), 'content', media, 'schema'],
        answer.body,
      );
    return (media === 'application/json' ? answer.body : answer.bytes) as T;
  }

  async signIn(email: string, password: string): Promise<this> {
    const { csrfToken } = await this.do<{ csrfToken: string }>('signIn', { body: { email, password } });
    this.#agent.csrfToken = csrfToken;
    return this;
  }
}

function addressOf(id: string, path: string, operation: Operation, input: CallInput): string {
  const named = (place: string, name: string): boolean =>
    operation.parameters.some((parameter) => parameter.in === place && parameter.name === name);
  for (const name of Object.keys(input.query ?? {}))
    if (!named('query', name)) throw new Error(`${id}: the document knows no ${name}`);
  const filled = path.replace(/\{(\w+)\}/g, (_all, name: string) => {
    const value = input.path?.[name];
    if (value === undefined || !named('path', name)) throw new Error(`${id}: what is ${name}?`);
    return encodeURIComponent(String(value));
  });
  return input.query ? `${filled}?${new URLSearchParams(input.query).toString()}` : filled;
}
