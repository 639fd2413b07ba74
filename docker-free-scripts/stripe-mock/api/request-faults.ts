import type { Service } from '#stand-ins/stripe-mock/service';
import type { RequestFaultRecord } from '#stand-ins/stripe-mock/state/records';

/** Counts a call against all ordered faults and returns the first that hits it. */
export function takeRequestFault(service: Service, method: string, path: string): RequestFaultRecord | null {
  return service.store.transact(() => {
    let hit: RequestFaultRecord | null = null;
    for (const fault of service.store.all('requestFaults')) {
      if (fault.method !== method || !matches(fault.path, path)) continue;
      const seen = fault.seen + 1;
      const last = fault.nth + fault.times - 1;
      if (seen >= last) service.store.remove('requestFaults', fault.id);
      else service.store.put('requestFaults', { ...fault, seen });
      if (seen >= fault.nth) hit ??= fault;
    }
    return hit;
  });
}

function matches(pattern: string, path: string): boolean {
  const wanted = pattern.split('/');
  const given = path.split('/');
  return (
    wanted.length === given.length && wanted.every((part, index) => part === '*' || part === given[index])
  );
}
