import { createContext, type ReactNode, useCallback, useContext, useEffect, useMemo, useState } from 'react';
import { useSearchParams } from 'react-router-dom';
import type { CurrencyCode } from '#domain/money/index';
import { Money } from './money.tsx';

/** Why a figure is what it is, as it comes over the wire or from a rule (a Derivation fits). */
export interface Why {
  readonly title: string;
  readonly steps: readonly {
    readonly label: string;
    readonly amountMinor?: number | undefined;
    readonly text?: string | undefined;
    readonly rule?: string | undefined;
    readonly version?: string | undefined;
  }[];
  readonly note?: string | undefined;
}

/** A figure that was asked about: its reasons in the currency of its page. */
export interface Asked {
  readonly why: Why;
  readonly currency: CurrencyCode | string;
}

interface MarginState {
  readonly openId: string | null;
  readonly asked: Asked | null;
  register(id: string, asked: Asked): () => void;
  toggle(id: string): void;
  close(): void;
  readonly extra: ReactNode;
  setExtra(extra: ReactNode): void;
}

const MarginContext = createContext<MarginState | null>(null);

/** Holds which figure is open, in the address (?why=), and what the figures on the page have to say. */
export function MarginProvider({ children }: { readonly children: ReactNode }) {
  const [search, setSearch] = useSearchParams();
  const [known, setKnown] = useState<ReadonlyMap<string, Asked>>(new Map());
  const [extra, setExtra] = useState<ReactNode>(null);
  const openId = search.get('why');
  const show = useCallback(
    (id: string | null) => {
      setSearch(
        (before) => {
          const next = new URLSearchParams(before);
          if (id === null) next.delete('why');
          else next.set('why', id);
          return next;
        },
        { replace: true },
      );
    },
    [setSearch],
  );
  const register = useCallback((id: string, asked: Asked) => {
    setKnown((before) => new Map(before).set(id, asked));
    return () =>
      setKnown((before) => {
        const next = new Map(before);
        next.delete(id);
        return next;
      });
  }, []);
  useEffect(() => {
    const onKey = (event: KeyboardEvent): void => {
      if (event.key === 'Escape' && openId !== null && !event.defaultPrevented) show(null);
    };
    window.addEventListener('keydown', onKey);
    return () => window.removeEventListener('keydown', onKey);
  }, [openId, show]);
  const state = useMemo<MarginState>(
    () => ({
      openId,
      asked: openId === null ? null : (known.get(openId) ?? null),
      register,
      toggle: (id) => show(openId === id ? null : id),
      close: () => show(null),
      extra,
      setExtra,
    }),
    [openId, known, register, show, extra],
  );
  return <MarginContext.Provider value={state}>{children}</MarginContext.Provider>;
}

/** The margin's state; undefined outside a page that has one (a dialog, the patient's page). */
export function useMargin(): MarginState | null {
  return useContext(MarginContext);
}

/** Puts something of the page's own under the reasons: who did what, a caution. */
export function MarginNote({ children }: { readonly children: ReactNode }) {
  const margin = useMargin();
  const setExtra = margin?.setExtra;
  useEffect(() => {
    setExtra?.(children);
    return () => setExtra?.(null);
  }, [setExtra, children]);
  return null;
}

/** To the right of the sheet, or a panel from the bottom: one line per step of the figure that was asked about. */
export function Margin({
  shortcuts = [],
}: {
  readonly shortcuts?: readonly { readonly keys: string; readonly words: string }[];
}) {
  const margin = useMargin();
  if (!margin) return null;
  const { asked } = margin;
  const place = asked
    ? 'max-lg:fixed max-lg:inset-x-0 max-lg:bottom-0 max-lg:z-20 max-lg:max-h-[60vh] max-lg:overflow-y-auto max-lg:border-t-2 max-lg:border-ink max-lg:bg-paper'
    : 'max-lg:hidden';
  return (
    <aside
      aria-label="Why this figure"
      className={`w-full shrink-0 border-rule px-5 py-6 lg:w-72 lg:border-l ${place}`}
    >
      {asked ? <Reasons asked={asked} close={margin.close} /> : <Shortcuts shortcuts={shortcuts} />}
      {margin.extra ? <div className="mt-6 text-small text-soft">{margin.extra}</div> : null}
    </aside>
  );
}

function Reasons({ asked, close }: { readonly asked: Asked; readonly close: () => void }) {
  const { why, currency } = asked;
  return (
    <div aria-live="polite">
      <div className="flex items-start justify-between gap-3">
        <div>
          <p className="text-small font-extrabold">{why.title}</p>
          <p className="mt-1 text-small text-soft">Why this figure</p>
        </div>
        <button
          type="button"
          onClick={close}
          className="min-h-8 text-small text-trypan underline underline-offset-3"
        >
          Close
        </button>
      </div>
      <dl className="mt-2">
        {why.steps.map((step, index) => {
          const last = index === why.steps.length - 1 && step.amountMinor !== undefined;
          return (
            <div
              // biome-ignore lint/suspicious/noArrayIndexKey: steps have no identity of their own and never reorder
              key={index}
              className={`flex justify-between gap-4 border-b py-2 text-small ${last ? 'border-b-2 border-ink font-semibold' : 'border-rule'}`}
            >
              <dt className={last ? '' : 'text-soft'}>
                {step.label}
                {step.rule || step.version ? (
                  <span className="block text-soft">
                    {[step.rule, step.version].filter(Boolean).join(', ')}
                  </span>
                ) : null}
              </dt>
              <dd className="text-right">
                {step.amountMinor === undefined ? null : (
                  <Money amount={step.amountMinor} currency={currency} />
                )}
                {step.text ? (
                  <span className={`tabular ${step.amountMinor === undefined ? '' : 'block text-soft'}`}>
                    {step.text}
                  </span>
                ) : null}
              </dd>
            </div>
          );
        })}
      </dl>
      {why.note ? <p className="mt-3 text-small text-soft">{why.note}</p> : null}
    </div>
  );
}

function Shortcuts({
  shortcuts,
}: {
  readonly shortcuts: readonly { readonly keys: string; readonly words: string }[];
}) {
  return (
    <div className="text-small text-soft">
      <p className="font-semibold">Keys on this page</p>
      <dl className="mt-2">
        {[
          ...shortcuts,
          { keys: '/', words: 'find a patient' },
          { keys: 'Esc', words: 'close the margin' },
        ].map(({ keys, words }) => (
          <div key={keys} className="flex gap-3 py-1">
            <dt className="w-10 font-semibold text-ink">{keys}</dt>
            <dd>{words}</dd>
          </div>
        ))}
      </dl>
      <p className="mt-3">Any dotted figure tells its reasons here.</p>
    </div>
  );
}
