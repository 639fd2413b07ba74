import { queryOptions, useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { getSession, type SessionView, signIn, signOut } from '#contract/session';
import { call, keepCsrfToken } from './call.ts';

/** Who is signed in. Everything that shows a screen of the clinic hangs on it. */
export const sessionQuery = queryOptions({
  queryKey: ['session'],
  queryFn: async ({ signal }): Promise<SessionView> => {
    const session = await call(getSession, {}, signal);
    keepCsrfToken(session.csrfToken);
    return session;
  },
  staleTime: 60_000,
});

/** The session of this browser; suspends until it is known. */
export function useSession(): SessionView {
  return useSuspenseQuery(sessionQuery).data;
}

/** Signs in; afterwards everything is fetched anew for this person. */
export function useSignIn() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: { email: string; password: string }) => call(signIn, { body }),
    onSuccess: (session) => {
      keepCsrfToken(session.csrfToken);
      client.clear();
      client.setQueryData(sessionQuery.queryKey, session);
    },
  });
}

/** Signs out and forgets everything that was read. */
export function useSignOut() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: () => call(signOut, {}),
    onSettled: async () => {
      keepCsrfToken(null);
      client.clear();
      await client.invalidateQueries(sessionQuery);
    },
  });
}
