import type { ReactNode } from 'react';
import { Button } from './button.tsx';

/** Ruled lines while something is on its way. */
export function Skeleton({
  rows = 5,
  label = 'Loading',
}: {
  readonly rows?: number;
  readonly label?: string;
}) {
  return (
    <div role="status" aria-label={label}>
      {Array.from({ length: rows }, (_each, index) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: rows of nothing
        <div key={index} className="flex h-10 items-center border-b border-rule">
          <span className="h-2 w-1/3 bg-rule" />
        </div>
      ))}
    </div>
  );
}

/** What would be here, and the one action that starts it. */
export function EmptyState({
  title,
  children,
  action,
}: {
  readonly title: string;
  readonly children?: ReactNode;
  readonly action?: ReactNode;
}) {
  return (
    <div className="border-y border-rule py-8">
      <p className="font-semibold">{title}</p>
      {children ? <div className="mt-1 max-w-prose text-soft">{children}</div> : null}
      {action ? <div className="mt-4">{action}</div> : null}
    </div>
  );
}

/** What failed, what is safe, and the way to try again. */
export function ErrorState({ error, retry }: { readonly error: unknown; readonly retry?: () => void }) {
  const words = error instanceof Error ? error.message : 'Something failed on our side. Nothing was changed.';
  return (
    <div role="alert" className="border-y-2 border-bengal py-6">
      <p className="font-extrabold text-bengal">This could not be shown</p>
      <p className="mt-1 max-w-prose">{words}</p>
      {retry ? (
        <div className="mt-4">
          <Button onPress={retry}>Try again</Button>
        </div>
      ) : null}
    </div>
  );
}

export type Tone = 'settled' | 'waiting' | 'wrong' | 'plain';

const TONE: Readonly<Record<Tone, string>> = {
  settled: 'text-lissamine',
  waiting: 'text-povidone',
  wrong: 'text-bengal',
  plain: 'text-soft',
};
const SHAPE: Readonly<Record<Tone, string>> = { settled: '●', waiting: '◐', wrong: '✕', plain: '○' };

/** A state: a shape and a word, never a colour alone. */
export function StateWord({ tone, children }: { readonly tone: Tone; readonly children: ReactNode }) {
  return (
    <span className={`whitespace-nowrap text-small font-semibold ${TONE[tone]}`}>
      <span aria-hidden="true" className="mr-1.5 text-[10px]">
        {SHAPE[tone]}
      </span>
      {children}
    </span>
  );
}

/** Where a figure touches treatment or money law. */
export function Caution({ children }: { readonly children: ReactNode }) {
  return (
    <div className="mt-8 text-small text-soft">
      <p className="font-semibold text-ink">Caution</p>
      <p className="mt-1 max-w-prose">{children}</p>
    </div>
  );
}
