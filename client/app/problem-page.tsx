import { isRouteErrorResponse, Link, useRouteError } from 'react-router-dom';
import { Wordmark } from '#client/ui/wordmark.tsx';

/** What stands where a page failed or is none. */
export function ProblemPage({ missing = false }: { readonly missing?: boolean }) {
  const error = useRouteError();
  const none = missing || (isRouteErrorResponse(error) && error.status === 404);
  return (
    <main className="mx-auto max-w-xl px-5 py-16">
      <Wordmark />
      <h1 className="mt-8">{none ? 'There is no such page' : 'This page failed'}</h1>
      <p className="mt-2 max-w-prose">
        {none
          ? 'The address may be old or mistyped. Nothing was changed.'
          : 'Something went wrong while it was drawn. What was saved is saved; reload the page, and tell the manager if it happens again.'}
      </p>
      <p className="mt-6">
        <Link to="/">Back to today</Link>
      </p>
    </main>
  );
}
