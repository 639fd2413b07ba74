import type { Eye } from '#domain/eye';

export interface PairEye {
  readonly eye: Eye;
  readonly state: 'planned' | 'done' | 'cancelled';
  readonly money: 'none' | 'half' | 'whole';
}

const STATE_WORDS = { planned: 'planned', done: 'done', cancelled: 'cancelled' } as const;
const MONEY_WORDS = { none: 'nothing paid', half: 'part paid', whole: 'paid' } as const;

/** What the mark says, in words: "right eye done and paid, left eye planned, part paid". */
export function pairWords(eyes: readonly PairEye[]): string {
  const words = (['OD', 'OS'] as const).flatMap((eye) => {
    const found = eyes.find((each) => each.eye === eye);
    if (!found) return [];
    const name = eye === 'OD' ? 'right eye' : 'left eye';
    if (found.state === 'cancelled') return [`${name} cancelled`];
    const joint = found.money === 'whole' ? ' and ' : ', ';
    return [`${name} ${STATE_WORDS[found.state]}${joint}${MONEY_WORDS[found.money]}`];
  });
  return words.length === 0 ? 'no eye' : words.join(', ');
}

/** Two discs on two short rules, right eye on the reader's left. The disc tells the eye, the rule the money. `only` draws one eye alone. */
export function PairMark({
  eyes,
  size = 'small',
  only,
}: {
  readonly eyes: readonly PairEye[];
  readonly size?: 'small' | 'large';
  readonly only?: Eye;
}) {
  const scale = size === 'large' ? 1.7 : 1;
  const shown = (['OD', 'OS'] as const).filter((eye) => only === undefined || eye === only);
  const width = 18 * shown.length - 2;
  return (
    <svg
      role="img"
      aria-label={pairWords(eyes)}
      width={width * scale}
      height={20 * scale}
      viewBox={`0 0 ${width} 20`}
      className="inline-block shrink-0 text-ink"
    >
      <title>{pairWords(eyes)}</title>
      {shown.map((eye, index) => (
        <EyeDisc key={eye} found={eyes.find((each) => each.eye === eye)} x={8 + index * 18} />
      ))}
    </svg>
  );
}

function EyeDisc({ found, x }: { readonly found: PairEye | undefined; readonly x: number }) {
  if (!found) return null;
  const { state, money } = found;
  return (
    <g stroke="currentColor" strokeWidth="2">
      <circle cx={x} cy={8} r={5.5} fill={state === 'done' ? 'currentColor' : 'none'} />
      {state === 'cancelled' ? <path d={`M${x - 7} 13 L${x + 7} 3`} /> : null}
      {money === 'none' ? null : (
        <path d={money === 'whole' ? `M${x - 7} 18 H${x + 7}` : `M${x - 7} 18 H${x}`} />
      )}
    </g>
  );
}
