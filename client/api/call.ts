import type { Contract, ContractCall, ContractResult } from '#contract/define';
import { networkProblem, problemOf } from './problem-error.ts';

let csrfToken: string | null = null;

/** Keeps the token that every writing request carries; the session hands it in. */
export function keepCsrfToken(token: string | null): void {
  csrfToken = token;
}

/**
 * Calls one operation and gives its parsed answer.
 * @throws ProblemError with the server's code, words and fields; code 'network' when nothing came back
 */
export async function call<C extends Contract>(
  contract: C,
  input: ContractCall<C>,
  signal?: AbortSignal,
): Promise<ContractResult<C>> {
  const { body } = input as { body?: unknown };
  const response = await send(contract, input, {
    ...(body === undefined ? {} : { body: JSON.stringify(body) }),
    ...(signal ? { signal } : {}),
    headers: body === undefined ? {} : { 'content-type': 'application/json' },
  });
  if (response.status === 204) return undefined as ContractResult<C>;
  return contract.response.parse(await response.json()) as ContractResult<C>;
}

async function send<C extends Contract>(
  contract: C,
  input: ContractCall<C>,
  init: RequestInit,
): Promise<Response> {
  let response: Response;
  try {
    response = await fetch(pathOf(contract, input), {
      ...init,
      method: contract.method.toUpperCase(),
      credentials: 'same-origin',
      headers: {
        ...init.headers,
        accept: 'application/json',
        ...(csrfToken && contract.method !== 'get' ? { 'x-csrf-token': csrfToken } : {}),
      },
    });
  } catch (error) {
    if (error instanceof DOMException && error.name === 'AbortError') throw error;
    throw networkProblem();
  }
  if (!response.ok) throw await problemOf(response);
  return response;
}

/** Where an operation lives, with its parameters filled in; for links to files and for call(). */
export function pathOf<C extends Contract>(contract: C, input: ContractCall<C>): string {
  const parts = input as {
    params?: Readonly<Record<string, unknown>>;
    query?: Readonly<Record<string, unknown>>;
  };
  const path = contract.path.replace(/:(\w+)/g, (_all, name: string) =>
    encodeURIComponent(String(parts.params?.[name])),
  );
  const query = new URLSearchParams();
  for (const [name, value] of Object.entries(parts.query ?? {})) {
    if (value !== undefined && value !== null && value !== '') query.set(name, String(value));
  }
  return query.size > 0 ? `${path}?${query.toString()}` : path;
}
