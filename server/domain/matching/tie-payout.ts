import { type Minor, negate, subtract, sum } from '#domain/money/index';

/** A movement on the processor's balance; amounts signed as the processor has them, net = amount − fee. */
export interface BalanceMovement {
  readonly id: string;
  /** The processor's reporting category. */
  readonly category: string;
  /** What it is about: a charge, a refund, a dispute; null where nothing stands behind it. */
  readonly sourceId: string | null;
  readonly amountMinor: Minor;
  readonly feeMinor: Minor;
  readonly netMinor: Minor;
}

/** What our books have for a thing of the processor. Signed like the movement it belongs to. */
export interface KnownSource {
  readonly sourceId: string;
  readonly kind: 'receipt' | 'refund' | 'dispute';
  /** Our number or key of it. */
  readonly ourId: number;
  readonly amountMinor: Minor;
}

export interface TiedMovement {
  readonly movementId: string;
  readonly to: { readonly kind: KnownSource['kind']; readonly ourId: number } | { readonly kind: 'fee' };
}

/** A movement that ties to nothing, and why. */
export interface Leftover {
  readonly movementId: string;
  readonly netMinor: Minor;
  readonly reason:
    | 'net_is_not_amount_less_fee'
    | 'no_source'
    | 'unknown_source'
    | 'amount_differs'
    | 'unknown_category';
}

export interface PayoutTie {
  readonly grossMinor: Minor;
  readonly refundsMinor: Minor;
  readonly disputesMinor: Minor;
  readonly feesMinor: Minor;
  /** Movements of categories we have no name for. */
  readonly otherMinor: Minor;
  readonly netMinor: Minor;
  /** The payout less the movements' net: zero when it adds up. */
  readonly differenceMinor: Minor;
  readonly tied: readonly TiedMovement[];
  readonly leftovers: readonly Leftover[];
  /** Adds up, and nothing is left over. */
  readonly ties: boolean;
}

/** Which column a category belongs to, and what has to stand behind it. */
const CATEGORIES: Readonly<
  Record<
    string,
    { readonly column: 'gross' | 'refunds' | 'disputes' | 'fees'; readonly kind: TiedMovement['to']['kind'] }
  >
> = {
  charge: { column: 'gross', kind: 'receipt' },
  refund: { column: 'refunds', kind: 'refund' },
  refund_failure: { column: 'refunds', kind: 'refund' },
  dispute: { column: 'disputes', kind: 'dispute' },
  dispute_reversal: { column: 'disputes', kind: 'dispute' },
  fee: { column: 'fees', kind: 'fee' },
};

/** The payout's own rows take the money off the balance; they are what the others add up to. */
const OWN: ReadonlySet<string> = new Set(['payout', 'payout_reversal']);

/**
 * Ties a payout to what it is made of: gross, refunds, disputes and fees add up to net, net is what was paid out, and every
 * movement stands on a receipt, refund or dispute of ours with the same amount. What does not is named.
 */
export function tiePayout(
  payoutMinor: Minor,
  movements: readonly BalanceMovement[],
  known: readonly KnownSource[],
): PayoutTie {
  const own = movements.filter(({ category }) => !OWN.has(category));
  const bySource = new Map(known.map((source) => [`${source.kind} ${source.sourceId}`, source]));
  const tied: TiedMovement[] = [];
  const leftovers: Leftover[] = [];
  for (const movement of own) {
    const found = tieMovement(movement, bySource);
    if (typeof found === 'string')
      leftovers.push({ movementId: movement.id, netMinor: movement.netMinor, reason: found });
    else tied.push({ movementId: movement.id, to: found });
  }
  const netMinor = sum(own.map((movement) => movement.netMinor));
  const differenceMinor = subtract(payoutMinor, netMinor);
  return {
    ...columns(own),
    netMinor,
    differenceMinor,
    tied,
    leftovers,
    ties: differenceMinor === 0 && leftovers.length === 0,
  };
}

function tieMovement(
  movement: BalanceMovement,
  bySource: ReadonlyMap<string, KnownSource>,
): TiedMovement['to'] | Leftover['reason'] {
  const category = CATEGORIES[movement.category];
  if (subtract(movement.amountMinor, movement.feeMinor) !== movement.netMinor)
    return 'net_is_not_amount_less_fee';
  if (!category) return 'unknown_category';
  if (category.kind === 'fee') return { kind: 'fee' };
  if (movement.sourceId === null) return 'no_source';
  const source = bySource.get(`${category.kind} ${movement.sourceId}`);
  if (!source) return 'unknown_source';
  if (source.amountMinor !== movement.amountMinor && !isReversal(movement, source)) return 'amount_differs';
  return { kind: source.kind, ourId: source.ourId };
}

/** A refund that failed and a dispute won come back with the sign turned. */
function isReversal(movement: BalanceMovement, source: KnownSource): boolean {
  const reverses = movement.category === 'refund_failure' || movement.category === 'dispute_reversal';
  return reverses && source.amountMinor === negate(movement.amountMinor);
}

/** Fees on charges, refunds and disputes stand in the fees' column; a fee of its own has its amount there too. */
function columns(own: readonly BalanceMovement[]) {
  const amounts = (column: 'gross' | 'refunds' | 'disputes' | 'fees' | undefined) =>
    own
      .filter(({ category }) => CATEGORIES[category]?.column === column)
      .map(({ amountMinor }) => amountMinor);
  return {
    grossMinor: sum(amounts('gross')),
    refundsMinor: sum(amounts('refunds')),
    disputesMinor: sum(amounts('disputes')),
    feesMinor: sum([...amounts('fees'), ...own.map(({ feeMinor }) => negate(feeMinor))]),
    otherMinor: sum(amounts(undefined)),
  };
}
