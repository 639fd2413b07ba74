import { present, presentById } from '#stand-ins/stripe-mock/serialise/present';
import { presentLineItem } from '#stand-ins/stripe-mock/serialise/session';
import type { Service } from '#stand-ins/stripe-mock/service';
import { ParameterError } from './errors.ts';
import { listBody, newestFirst } from './lists.ts';

const DEEPEST = 4;

type Node = Record<string, unknown>;

/**
 * Replaces ids in an answer by the objects they name, along the paths asked for (`payment_intent.latest_charge`,
 * `data.source`). Members that are shown only on request are added: a session's line items, a charge's refunds.
 *
 * @throws ParameterError for a path that leads nowhere
 */
export function expand(service: Service, answer: object, paths: readonly string[]): object {
  const root = structuredClone(answer) as Node;
  for (const path of paths) {
    const steps = path.split('.');
    if (steps.length > DEEPEST) throw notExpandable(path);
    walk(service, root, steps, path);
  }
  return root;
}

function walk(service: Service, node: Node, steps: readonly string[], path: string): void {
  const [step, ...rest] = steps;
  if (step === undefined) return;
  if (step === 'data' && Array.isArray(node.data)) {
    for (const item of node.data as Node[]) walk(service, item, rest, path);
    return;
  }
  const value = node[step] ?? onRequest(service, node, step);
  // What may be there but is not now (no charge yet, no refund failed) expands to nothing.
  if (value === undefined && !MAYBE_ABSENT.has(step)) throw notExpandable(path);
  if (value === undefined || value === null) return;
  const expanded = typeof value === 'string' ? presentById(service, value) : value;
  if (typeof expanded !== 'object') throw notExpandable(path);
  node[step] = expanded;
  walk(service, expanded as Node, rest, path);
}

const MAYBE_ABSENT = new Set(['failure_balance_transaction']);

function onRequest(service: Service, node: Node, step: string): unknown {
  if (Object.hasOwn(node, step)) return null;
  const id = String(node.id);
  if (node.object === 'checkout.session' && step === 'line_items') {
    const session = service.store.get('sessions', id);
    const items = session.lineItems.map((item) => presentLineItem(session, item));
    return listBody(`/v1/checkout/sessions/${id}/line_items`, { items, hasMore: false });
  }
  if (node.object === 'charge' && step === 'refunds') {
    const refunds = service.store.all('refunds').filter((refund) => refund.chargeId === id);
    const items = newestFirst(refunds).map((refund) => present(service, 'refunds', refund));
    return listBody(`/v1/charges/${id}/refunds`, { items, hasMore: false });
  }
  return undefined;
}

function notExpandable(path: string): ParameterError {
  return new ParameterError(
    'expand',
    'property_not_expandable',
    `This property cannot be expanded (${path}).`,
  );
}
