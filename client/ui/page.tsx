import { type ReactNode, useEffect } from 'react';
import { Margin, MarginProvider } from './margin.tsx';

export interface PageProps {
  /** Title of the browser's tab and of the page. */
  readonly title: string;
  readonly lead?: ReactNode;
  /** Above the title: where this belongs. */
  readonly over?: ReactNode;
  readonly actions?: ReactNode;
  readonly shortcuts?: readonly { readonly keys: string; readonly words: string }[];
  readonly children: ReactNode;
}

/** A page of the clinic: one sheet with its head, the margin to its right. */
export function Page({ title, lead, over, actions, shortcuts = [], children }: PageProps) {
  useEffect(() => {
    document.title = `${title} · Tenderlight`;
  }, [title]);
  return (
    <MarginProvider>
      <div className="flex grow flex-col lg:flex-row">
        <main
          id="content"
          tabIndex={-1}
          className="min-w-0 max-w-[72rem] grow bg-sheet px-4 py-6 outline-none sm:px-10 sm:py-8"
        >
          <header className="mb-6 flex flex-wrap items-end justify-between gap-4 xl:flex-nowrap">
            <div className="min-w-0">
              {over ? <p className="text-soft">{over}</p> : null}
              <h1>{title}</h1>
              {lead ? <p className="mt-1 text-soft">{lead}</p> : null}
            </div>
            {actions ? <div className="flex flex-wrap items-center gap-3 xl:shrink-0">{actions}</div> : null}
          </header>
          {children}
        </main>
        <Margin shortcuts={shortcuts} />
      </div>
    </MarginProvider>
  );
}

/** A part of a sheet with its own heading. */
export function Section({
  title,
  children,
  aside,
}: {
  readonly title: string;
  readonly children: ReactNode;
  readonly aside?: ReactNode;
}) {
  return (
    <section className="mt-10 first:mt-0">
      <div className="mb-2 flex flex-wrap items-baseline justify-between gap-3">
        <h2>{title}</h2>
        {aside}
      </div>
      {children}
    </section>
  );
}

/** Ruled label and value pairs. */
export function DefinitionRows({
  rows,
}: {
  readonly rows: readonly {
    readonly label: ReactNode;
    readonly value: ReactNode;
    readonly strong?: boolean;
  }[];
}) {
  return (
    <dl>
      {rows.map((row, index) => (
        <div
          // biome-ignore lint/suspicious/noArrayIndexKey: fixed rows
          key={index}
          className={`flex flex-wrap justify-between gap-x-6 border-b py-2 ${row.strong ? 'border-b-2 border-ink text-lead font-extrabold' : 'border-rule'}`}
        >
          <dt>{row.label}</dt>
          <dd className="tabular text-right">{row.value}</dd>
        </div>
      ))}
    </dl>
  );
}
