import { useMutation } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { useNavigate, useSearchParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { useSession, useSignIn } from '#client/api/session.ts';
import { Button } from '#client/ui/button.tsx';
import { TextField } from '#client/ui/fields.tsx';
import { Wordmark } from '#client/ui/wordmark.tsx';
import { askPasswordReset } from '#contract/users';

/** Sign in; in the demonstration, with one of its people. */
export function SignInPage() {
  const session = useSession();
  const signIn = useSignIn();
  const navigate = useNavigate();
  const [search] = useSearchParams();
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const reset = useMutation({ mutationFn: () => call(askPasswordReset, { body: { email } }) });
  useEffect(() => {
    document.title = 'Sign in · Tenderlight';
    if (session.person) void navigate(safePath(search.get('to')), { replace: true });
  }, [session.person, navigate, search]);
  return (
    <main className="mx-auto grid w-full max-w-4xl gap-10 px-5 py-12 md:grid-cols-2">
      <div>
        <Wordmark />
        <h1 className="mt-8">Sign in</h1>
        <p className="mt-1 text-soft">The money desk of the clinic.</p>
        <form
          className="mt-6 grid gap-4"
          onSubmit={(event) => {
            event.preventDefault();
            signIn.mutate({ email, password });
          }}
        >
          <TextField
            label="E-mail"
            type="email"
            autoComplete="username"
            required
            value={email}
            onChange={setEmail}
          />
          <TextField
            label="Password"
            type="password"
            autoComplete="current-password"
            required
            value={password}
            onChange={setPassword}
            error={signIn.error?.message}
          />
          <div className="flex flex-wrap items-center gap-4">
            <Button kind="primary" type="submit" sending={signIn.isPending}>
              Sign in
            </Button>
            <Button
              kind="quiet"
              sending={reset.isPending}
              disabled={email === ''}
              onPress={() => reset.mutate()}
            >
              Send me a new password
            </Button>
          </div>
          {reset.isSuccess ? (
            <p role="status">If the address is known here, a mail with a link is on its way.</p>
          ) : null}
          {reset.error ? (
            <p role="alert" className="font-semibold text-bengal">
              {reset.error.message}
            </p>
          ) : null}
        </form>
      </div>
      {session.demo ? (
        <div>
          <h2>People of the demonstration</h2>
          <p className="mt-1 text-small text-soft">
            An invented clinic; everybody has the same password. Choose one, then sign in.
          </p>
          <ul className="mt-3">
            {session.demo.people.map((person) => (
              <li key={person.email} className="border-b border-rule">
                <button
                  type="button"
                  className="flex min-h-10 w-full flex-wrap items-center justify-between gap-x-4 py-1 text-left"
                  onClick={() => {
                    setEmail(person.email);
                    setPassword(session.demo?.password ?? '');
                  }}
                >
                  <span className="font-semibold text-trypan underline underline-offset-3">
                    {person.name}
                  </span>
                  <span className="text-small text-soft">
                    {person.roles.map((role) => role.replace('_', ' ')).join(', ')} · {person.email}
                  </span>
                </button>
              </li>
            ))}
          </ul>
          <p className="mt-3 text-small text-soft">
            Password <span className="font-semibold text-ink">{session.demo.password}</span>
          </p>
        </div>
      ) : null}
    </main>
  );
}

/** Only paths of our own are gone back to. */
function safePath(path: string | null): string {
  return path?.startsWith('/') && !path.startsWith('//') ? path : '/';
}
