import type { Service } from '#stand-ins/stripe-mock/service';
import type { Read, Shape } from './parameters.ts';
import { listOf, readShape, required, text } from './parameters.ts';

/** One call of the API: where it is, what it takes, and what it does. */
export interface Route {
  readonly method: 'GET' | 'POST';
  /** With `:id` in the place of an object's id. */
  readonly path: string;
  /** Reads the parameters (and refuses them, before anything has begun); returns the work itself. */
  readonly prepare: (service: Service, id: string, raw: unknown) => Prepared;
}

export interface Prepared {
  readonly expand: readonly string[];
  /** Runs as one transaction; whatever it throws undoes it. */
  readonly work: () => object;
}

export function route<S extends Shape>(
  method: Route['method'],
  path: string,
  shape: S,
  work: (service: Service, parameters: Read<S>, id: string) => object,
): Route {
  const withExpand = { ...shape, expand: listOf(required(text())) };
  return {
    method,
    path,
    prepare: (service, id, raw) => {
      const parameters = readShape(raw, withExpand) as Read<S> & { expand: string[] | undefined };
      return { expand: parameters.expand ?? [], work: () => work(service, parameters, id) };
    },
  };
}
