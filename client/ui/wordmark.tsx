/** Two discs on one rule: the pair, and the ledger under it. */
export function Wordmark({ bare = false }: { readonly bare?: boolean }) {
  return (
    <span className="inline-flex items-center gap-2 text-ink">
      <svg
        aria-hidden="true"
        width="38"
        height="22"
        viewBox="0 0 38 22"
        fill="none"
        stroke="currentColor"
        strokeWidth="2"
      >
        <circle cx="9" cy="9" r="6" />
        <circle cx="28" cy="9" r="7" fill="currentColor" stroke="none" />
        <path d="M0 20H38" />
      </svg>
      {bare ? (
        <span className="sr-only">Tenderlight</span>
      ) : (
        <span className="text-lead font-extrabold">Tenderlight</span>
      )}
    </span>
  );
}
