import { StateWord } from '#client/ui/states.tsx';
import type { BookFindingView } from '#contract/catalogue';

/** What is wrong with a book, and what to change; a book in force has notices at most. */
export function Findings({
  findings,
  draft,
}: {
  readonly findings: readonly BookFindingView[];
  readonly draft: boolean;
}) {
  if (findings.length === 0) return null;
  const errors = findings.filter((finding) => finding.severity === 'error').length;
  return (
    <details open={draft && errors > 0} className="mb-6 border-y border-rule py-3">
      <summary className="min-h-6 cursor-pointer font-semibold">
        {errors > 0
          ? `${errors === 1 ? 'One error' : `${errors} errors`} to be put right before it can come into force`
          : `${findings.length === 1 ? 'One notice' : `${findings.length} notices`}, no error`}
      </summary>
      <ul className="mt-2">
        {findings.map((finding) => (
          <li
            key={`${finding.code}-${finding.field}-${finding.words}`}
            className="border-b border-rule py-1.5 text-small"
          >
            <StateWord tone={finding.severity === 'error' ? 'wrong' : 'waiting'}>
              {finding.severity === 'error' ? 'error' : 'notice'}
            </StateWord>{' '}
            {finding.words} <span className="text-soft">{finding.change}</span>
          </li>
        ))}
      </ul>
    </details>
  );
}
