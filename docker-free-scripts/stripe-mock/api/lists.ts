import type { PublicKind } from '#stand-ins/stripe-mock/serialise/present';
import { present } from '#stand-ins/stripe-mock/serialise/present';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { Collections, Stored } from '#stand-ins/stripe-mock/state/records';
import { noSuch } from './errors.ts';
import { integer, text } from './parameters.ts';

/** Parameters every list takes. */
export const PAGE = {
  limit: integer({ least: 1, most: 100 }),
  starting_after: text(),
  ending_before: text(),
} as const;

export interface PageRequest {
  readonly limit: number | undefined;
  readonly starting_after: string | undefined;
  readonly ending_before: string | undefined;
}

export interface Page<T> {
  readonly items: readonly T[];
  readonly hasMore: boolean;
}

const DEFAULT_LIMIT = 10;

/**
 * One page of a list that is already in its published order.
 *
 * @throws ApiError 400 when the cursor names nothing in the list
 */
export function pageOf<T extends { readonly id: string }>(
  ordered: readonly T[],
  request: PageRequest,
  noun: string,
): Page<T> {
  const limit = request.limit ?? DEFAULT_LIMIT;
  if (request.ending_before !== undefined) {
    const end = positionOf(ordered, request.ending_before, noun, 'ending_before');
    const start = Math.max(0, end - limit);
    return { items: ordered.slice(start, end), hasMore: start > 0 };
  }
  const start =
    request.starting_after === undefined
      ? 0
      : positionOf(ordered, request.starting_after, noun, 'starting_after') + 1;
  return { items: ordered.slice(start, start + limit), hasMore: ordered.length > start + limit };
}

function positionOf(ordered: readonly { id: string }[], id: string, noun: string, param: string): number {
  const position = ordered.findIndex((item) => item.id === id);
  if (position === -1) throw noSuch(noun, id, param, 400);
  return position;
}

/** Newest first; within a second the one made later first. */
export function newestFirst<T extends Stored>(records: readonly T[]): T[] {
  return [...records].sort((a, b) => b.created - a.created || b.seq - a.seq);
}

/** Whether a filter, where one is given, asks for this value. */
export function asked<T>(filter: T | undefined, value: NoInfer<T> | null | undefined): boolean {
  return filter === undefined || filter === value;
}

export function listBody(
  url: string,
  page: { readonly items: readonly object[]; readonly hasMore: boolean },
): object {
  return { object: 'list', data: page.items, has_more: page.hasMore, url };
}

/** The records that pass the filter, as the published list. */
export function listRecords<K extends PublicKind>(
  service: Service,
  kind: K,
  list: { readonly url: string; readonly noun: string; readonly page: PageRequest },
  passes: (record: Collections[K]) => boolean,
): object {
  const ordered = newestFirst(service.store.all(kind).filter(passes));
  const { items, hasMore } = pageOf(ordered, list.page, list.noun);
  return listBody(list.url, { items: items.map((record) => present(service, kind, record)), hasMore });
}
