import type { Laterality } from '#domain/eye';
import { add, type Minor, minor, splitByWeights, splitEvenly, ZERO } from '#domain/money/index';
import { allocateByStandAlone } from '#domain/obligations/index';
import { followUpsOf } from './aftercare.ts';
import type { WantedCourse } from './check-input.ts';
import type { Obligation, ObligationKind, ObligationPart } from './course.ts';
import type { Part, Promised } from './part.ts';

/** The order in which obligations stand and odd cents are handed out. */
const ORDER: Readonly<Record<ObligationKind, number>> = {
  assessment: 0,
  surgery: 1,
  aftercare: 2,
  enhancement: 3,
  service: 4,
  goods: 5,
  instalment_charge: 6,
};
const COLUMNS: readonly Laterality[] = ['OD', 'OS', 'OU'];

interface Gathered {
  readonly first: Promised;
  standAlone: Minor;
  /** Stand-alone prices of what stands behind it, per column; null where nothing does. */
  readonly OD: Minor | null;
  readonly OS: Minor | null;
  readonly OU: Minor | null;
}

/**
 * What is promised with its part of the price without tax.
 * Policy B: relative stand-alone price over all; policy A: all of it at the eyes' surgery.
 */
export function obligationsOf(
  wanted: WantedCourse,
  promises: readonly Promised[],
  withoutTaxMinor: Minor,
): Obligation[] {
  const gathered = gather(promises);
  const onlySurgery = wanted.compiled.book.allocationPolicy === 'A';
  const weights = gathered.map(({ first, standAlone }) =>
    onlySurgery && first.kind !== 'surgery' ? ZERO : standAlone,
  );
  if (weights.every((weight) => weight === 0)) {
    for (const [index, { first }] of gathered.entries())
      if (first.kind === 'surgery') weights[index] = minor(1);
  }
  const allocated = allocateByStandAlone(withoutTaxMinor, weights);
  return gathered.map((each, index) => {
    const allocatedMinor = allocated[index] ?? ZERO;
    const columns = COLUMNS.filter((column) => each[column] !== null);
    return {
      id: each.first.obligationId,
      kind: each.first.kind,
      label: each.first.label,
      laterality: columns.length === 1 ? each.first.laterality : 'OU',
      standAloneMinor: each.standAlone,
      allocatedMinor,
      parts: partsOf(each, columns, allocatedMinor, wanted),
    };
  });
}

function gather(promises: readonly Promised[]): Gathered[] {
  const found: Gathered[] = [];
  for (const promise of promises) {
    let open = found.find(({ first }) => first.obligationId === promise.obligationId);
    if (!open) {
      open = { first: promise, standAlone: ZERO, OD: null, OS: null, OU: null };
      found.push(open);
    }
    open.standAlone = add(open.standAlone, promise.standAloneMinor);
    const column: { -readonly [Column in Laterality]: Minor | null } = open;
    column[promise.laterality] = add(column[promise.laterality] ?? ZERO, promise.standAloneMinor);
  }
  return found.sort(
    (a, b) =>
      ORDER[a.first.kind] - ORDER[b.first.kind] || (a.first.obligationId < b.first.obligationId ? -1 : 1),
  );
}

/** Aftercare is delivered visit by visit, everything else eye by eye where it belongs to eyes. */
function partsOf(
  gathered: Gathered,
  columns: readonly Laterality[],
  allocatedMinor: Minor,
  wanted: WantedCourse,
): ObligationPart[] {
  const { obligationId: id, kind, label } = gathered.first;
  const weights = columns.map((column) => (gathered.standAlone === 0 ? 1 : (gathered[column] ?? 0)));
  const shares = columns.length === 1 ? [allocatedMinor] : splitByWeights(allocatedMinor, weights);
  const parts: ObligationPart[] = [];
  for (const [index, laterality] of columns.entries()) {
    const amountMinor = shares[index] ?? ZERO;
    if (kind === 'aftercare') addVisits(parts, wanted, laterality, amountMinor);
    else
      parts.push({ id: columns.length === 1 ? id : `${id}:${laterality}`, label, laterality, amountMinor });
  }
  return parts;
}

function addVisits(
  parts: ObligationPart[],
  wanted: WantedCourse,
  laterality: Laterality,
  amount: Minor,
): void {
  const schedules = followUpsOf(wanted);
  const eye = wanted.eyes.find((each) => each.eye === laterality);
  const per = eye ? 'eye' : 'course';
  const schedule =
    schedules.find((each) => each.per === per && (!eye || each.id === eye.procedure.followUpId)) ??
    schedules[0];
  const visits = schedule?.visits ?? [];
  const amounts = splitEvenly(amount, Math.max(visits.length, 1));
  const id = eye ? `aftercare:${laterality}` : 'aftercare';
  for (const [index, amountMinor] of amounts.entries()) {
    const label = visits[index]?.label ?? 'Aftercare';
    parts.push({ id: `${id}:${index + 1}`, label, laterality, amountMinor });
  }
}

/** The charge for paying over time is a promise of its own, at its own price. */
export function chargeObligation(charge: Part): Obligation {
  const id = 'instalment-charge';
  const { label } = charge.words;
  const amountMinor = charge.withoutTaxMinor;
  return {
    id,
    kind: 'instalment_charge',
    label,
    laterality: 'OU',
    standAloneMinor: amountMinor,
    allocatedMinor: amountMinor,
    parts: [{ id, label, laterality: 'OU', amountMinor }],
  };
}
