import type { ProofControlView } from '#contract/proof';
import { type Minor, subtract, sum } from '#domain/money/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import type { Trx } from '#server/platform/db';

/** What a control looks at: everything booked up to a day. Proof is of the whole clinic; its readers see all sites. */
export interface ProofScope {
  readonly asOf: ClinicDate;
  readonly now: Instant;
}

/** One thing computed two ways. */
export interface ProofRow {
  readonly label: string;
  readonly leftMinor: Minor;
  readonly rightMinor: Minor;
  readonly link?: string;
}

/** Something that must not be, where no sums can be compared: a gap, a broken seal. */
export interface ProofFinding {
  readonly label: string;
  readonly finding: string;
  readonly link?: string;
}

interface Described {
  readonly id: string;
  readonly title: string;
  readonly leftWords: string;
  readonly rightWords: string;
}

/** A control total; each capability registers its own in controls/. */
export type ProofControl =
  | (Described & {
      readonly kind: 'sums';
      compute(trx: Trx, scope: ProofScope): Promise<readonly ProofRow[]>;
    })
  | (Described & {
      readonly kind: 'findings';
      compute(
        trx: Trx,
        scope: ProofScope,
      ): Promise<{ readonly checked: number; readonly findings: readonly ProofFinding[] }>;
    });

/** Runs a control. Rows that tie are counted, rows that differ are shown, each with its way to the source. */
export async function runControl(
  trx: Trx,
  control: ProofControl,
  scope: ProofScope,
): Promise<ProofControlView> {
  const { id, title, leftWords, rightWords } = control;
  if (control.kind === 'findings') {
    const { checked, findings } = await control.compute(trx, scope);
    return {
      id,
      title,
      leftWords,
      rightWords,
      leftMinor: null,
      rightMinor: null,
      differenceMinor: null,
      checked,
      tied: findings.length === 0,
      rows: findings.map(({ label, finding, link }) => ({
        label,
        leftMinor: null,
        rightMinor: null,
        differenceMinor: null,
        finding,
        link: link ?? null,
      })),
    };
  }
  const rows = await control.compute(trx, scope);
  const differing = rows.filter((row) => row.leftMinor !== row.rightMinor);
  const leftMinor = sum(rows.map((row) => row.leftMinor));
  const rightMinor = sum(rows.map((row) => row.rightMinor));
  return {
    id,
    title,
    leftWords,
    rightWords,
    leftMinor,
    rightMinor,
    differenceMinor: subtract(leftMinor, rightMinor),
    checked: rows.length,
    // Differences that cancel each other are differences still.
    tied: differing.length === 0,
    rows: differing.map(({ label, leftMinor: left, rightMinor: right, link }) => ({
      label,
      leftMinor: left,
      rightMinor: right,
      differenceMinor: subtract(left, right),
      finding: null,
      link: link ?? null,
    })),
  };
}
