import type { Contract, ContractCall, ContractResult } from '#contract/define';
import type { ProblemBody } from '#contract/problem';

/** What came back, whatever its status. */
export interface Answer<T = unknown> {
  readonly status: number;
  readonly headers: Headers;
  readonly body: T;
  readonly bytes: Buffer;
}

/** A browser without a screen: cookies, the CSRF token, JSON. */
export class Agent {
  readonly #baseUrl: string;
  readonly #cookies = new Map<string, string>();
  csrfToken: string | null = null;

  constructor(baseUrl: string) {
    this.#baseUrl = baseUrl;
  }

  /** Sends one request; a body goes as JSON, extra headers win. */
  async send(
    method: string,
    path: string,
    body?: unknown,
    headers: Readonly<Record<string, string>> = {},
  ): Promise<Answer> {
    const response = await fetch(this.#baseUrl + path, {
      method,
      redirect: 'manual',
      headers: {
        ...(this.#cookies.size > 0
          ? { cookie: [...this.#cookies].map(([k, v]) => `${k}=${v}`).join('; ') }
          : {}),
        ...(body === undefined ? {} : { 'content-type': 'application/json' }),
        ...(this.csrfToken && method !== 'GET' ? { 'x-csrf-token': this.csrfToken } : {}),
        ...headers,
      },
      ...(body === undefined ? {} : { body: typeof body === 'string' ? body : JSON.stringify(body) }),
    });
    this.#keepCookies(response);
    const bytes = Buffer.from(await response.arrayBuffer());
    const json = (response.headers.get('content-type') ?? '').includes('json');
    return {
      status: response.status,
      headers: response.headers,
      body: json && bytes.length > 0 ? JSON.parse(bytes.toString('utf8')) : undefined,
      bytes,
    };
  }

  /** Calls a contract and expects its success; throws with the problem otherwise. */
  async call<C extends Contract>(contract: C, input: ContractCall<C>): Promise<ContractResult<C>> {
    const answer = await this.tryCall(contract, input);
    if (answer.status !== contract.status) {
      throw new Error(`${contract.id}: ${answer.status} ${JSON.stringify(answer.body)}`);
    }
    return answer.body as ContractResult<C>;
  }

  /** Calls a contract and returns whatever came. */
  async tryCall<C extends Contract>(
    contract: C,
    input: ContractCall<C>,
  ): Promise<Answer<ContractResult<C> & Partial<ProblemBody>>> {
    const parts = input as {
      params?: Record<string, unknown>;
      query?: Record<string, unknown>;
      body?: unknown;
    };
    const path = contract.path.replace(/:(\w+)/g, (_all, name: string) =>
      encodeURIComponent(String(parts.params?.[name])),
    );
    const query = new URLSearchParams();
    for (const [name, value] of Object.entries(parts.query ?? {}))
      if (value !== undefined) query.set(name, String(value));
    const search = query.size > 0 ? `?${query.toString()}` : '';
    return (await this.send(contract.method.toUpperCase(), path + search, parts.body)) as Answer<
      ContractResult<C> & Partial<ProblemBody>
    >;
  }

  /** The cookies held, by name. */
  cookie(name: string): string | undefined {
    return this.#cookies.get(name);
  }

  #keepCookies(response: Response): void {
    for (const line of response.headers.getSetCookie()) {
      const [pair = ''] = line.split(';');
      const at = pair.indexOf('=');
      const value = pair.slice(at + 1);
      if (value === '') this.#cookies.delete(pair.slice(0, at));
      else this.#cookies.set(pair.slice(0, at), value);
    }
  }
}
