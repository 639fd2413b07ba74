import type { Laterality } from '#domain/eye';
import { add, type Minor, minor, splitByWeights, splitEvenly, ZERO } from '#domain/money/index';
import { allocateByStandAlone } from '#domain/obligations/index';
import type { WantedCourse } from './check-input.ts';
import type { Obligation, ObligationKind, ObligationPart } from './course.ts';
import { aftercareOf, type Promised } from './parts.ts';

/** The order in which obligations stand and odd cents are handed out. */
const ORDER: readonly ObligationKind[] = [
  'assessment',
  'surgery',
  'aftercare',
  'enhancement',
  'service',
  'goods',
];

interface Gathered {
  readonly id: string;
  readonly kind: ObligationKind;
  readonly label: string;
  readonly laterality: Laterality;
  readonly standAloneMinor: Minor;
  /** What stands behind it, per column, in the order OD, OS, OU. */
  readonly weights: readonly { readonly laterality: Laterality; readonly standAloneMinor: Minor }[];
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
  const policy = wanted.compiled.book.allocationPolicy;
  const weights = gathered.map((each) =>
    policy === 'A' && each.kind !== 'surgery' ? ZERO : each.standAloneMinor,
  );
  const allocated = allocateByStandAlone(withoutTaxMinor, weights);
  return gathered.map((each, index) => {
    const allocatedMinor = allocated[index] ?? ZERO;
    const { id, kind, label, laterality, standAloneMinor } = each;
    return {
      id,
      kind,
      label,
      laterality,
      standAloneMinor,
      allocatedMinor,
      parts: partsOf(each, allocatedMinor, wanted),
    };
  });
}

function gather(promises: readonly Promised[]): Gathered[] {
  const byId = new Map<string, Promised[]>();
  for (const promise of promises) {
    const group = byId.get(promise.obligationId);
    if (group) group.push(promise);
    else byId.set(promise.obligationId, [promise]);
  }
  const columns: readonly Laterality[] = ['OD', 'OS', 'OU'];
  return [...byId]
    .flatMap(([id, group]): Gathered[] => {
      const [first] = group;
      if (!first) return [];
      const weights = columns.flatMap((laterality) => {
        const mine = group.filter((promise) => promise.laterality === laterality);
        if (mine.length === 0) return [];
        return [
          {
            laterality,
            standAloneMinor: mine.reduce((total, each) => add(total, each.standAloneMinor), ZERO),
          },
        ];
      });
      const standAloneMinor = weights.reduce((total, each) => add(total, each.standAloneMinor), ZERO);
      const laterality = weights.length === 1 ? first.laterality : 'OU';
      return [{ id, kind: first.kind, label: first.label, laterality, standAloneMinor, weights }];
    })
    .sort((a, b) => ORDER.indexOf(a.kind) - ORDER.indexOf(b.kind) || (a.id < b.id ? -1 : 1));
}

/** Aftercare is delivered visit by visit, everything else eye by eye where it belongs to eyes. */
function partsOf(gathered: Gathered, allocatedMinor: Minor, wanted: WantedCourse): ObligationPart[] {
  const { id, label, weights } = gathered;
  const even = weights.every(({ standAloneMinor }) => standAloneMinor === 0);
  const shares = splitByWeights(
    allocatedMinor,
    even ? weights.map(() => 1) : weights.map((w) => w.standAloneMinor),
  );
  if (gathered.kind === 'aftercare') {
    return weights.flatMap(({ laterality }, index) => visits(wanted, laterality, shares[index] ?? ZERO));
  }
  return weights.map(({ laterality }, index) => ({
    id: weights.length === 1 ? id : `${id}:${laterality}`,
    label,
    laterality,
    amountMinor: shares[index] ?? minor(0),
  }));
}

function visits(wanted: WantedCourse, laterality: Laterality, amountMinor: Minor): ObligationPart[] {
  const schedules = aftercareOf(wanted).followUpIds.map((id) => wanted.compiled.followUps.get(id));
  const eye = wanted.eyes.find((each) => each.eye === laterality);
  const schedule =
    schedules.find(
      (found) => found?.per === (eye ? 'eye' : 'course') && (!eye || found.id === eye.procedure.followUpId),
    ) ?? schedules[0];
  const labels =
    schedule && schedule.visits.length > 0 ? schedule.visits.map((visit) => visit.label) : ['Aftercare'];
  const id = eye ? `aftercare:${laterality}` : 'aftercare';
  return splitEvenly(amountMinor, labels.length).map((part, index) => ({
    id: `${id}:${index + 1}`,
    label: labels[index] ?? '',
    laterality,
    amountMinor: part,
  }));
}
