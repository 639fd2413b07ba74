import type { ReactNode } from 'react';
import { EYES, type Eye } from '#domain/eye';

export const EYE_NAMES: Readonly<Record<Eye, string>> = { OD: 'Right eye', OS: 'Left eye' };

/** Two columns, right eye on the reader's left, a rule between them; on a phone one under the other. */
export function EyeColumns({
  children,
  headings = true,
  done = [],
}: {
  readonly children: (eye: Eye) => ReactNode;
  /** Without headings where the columns go on from ones above that have them. */
  readonly headings?: boolean;
  /** Eyes whose surgery is done: their disc is filled. */
  readonly done?: readonly Eye[];
}) {
  return (
    <div className={`grid md:grid-cols-2 ${headings ? 'border-t-2 border-ink' : ''}`}>
      {EYES.map((eye) => {
        const side =
          eye === 'OD' ? 'md:border-r md:border-ink md:pr-8' : 'max-md:border-t max-md:border-rule md:pl-8';
        return headings ? (
          <section key={eye} aria-label={EYE_NAMES[eye]} className={`min-w-0 py-4 ${side}`}>
            <EyeHeading eye={eye} done={done.includes(eye)} />
            {children(eye)}
          </section>
        ) : (
          <fieldset key={eye} className={`min-w-0 py-4 ${side}`}>
            <legend className="contents">
              <span className="mb-2 block text-small text-soft md:sr-only">{EYE_NAMES[eye]}</span>
            </legend>
            {children(eye)}
          </fieldset>
        );
      })}
    </div>
  );
}

function EyeHeading({ eye, done }: { readonly eye: Eye; readonly done: boolean }) {
  return (
    <h2 className="mb-3 flex items-center gap-3">
      <svg aria-hidden="true" width="16" height="16" viewBox="0 0 16 16" className="shrink-0">
        <circle
          cx="8"
          cy="8"
          r="6.5"
          fill={done ? 'currentColor' : 'none'}
          stroke="currentColor"
          strokeWidth="2"
        />
      </svg>
      {EYE_NAMES[eye]} <span className="text-small font-normal text-soft">{eye}</span>
    </h2>
  );
}
