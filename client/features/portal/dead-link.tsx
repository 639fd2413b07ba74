import { ProblemError } from '#client/api/problem-error.ts';

/** A link that opens nothing any more: why, and what to do. */
export function DeadLink({ error }: { readonly error: Error }) {
  const gone =
    error instanceof ProblemError &&
    (error.code === 'gone' || error.code === 'not_found' || error.code === 'not_signed_in');
  return (
    <div role="alert">
      <h1>{gone ? 'This link opens nothing any more' : 'Your quote cannot be shown just now'}</h1>
      <p className="mt-3">{error.message}</p>
      <p className="mt-3 text-soft">Nothing was lost: your quote is kept at the clinic.</p>
    </div>
  );
}
