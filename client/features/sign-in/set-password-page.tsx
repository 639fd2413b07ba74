import { useMutation } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { Link } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { ProblemError } from '#client/api/problem-error.ts';
import { Button } from '#client/ui/button.tsx';
import { TextField } from '#client/ui/fields.tsx';
import { Wordmark } from '#client/ui/wordmark.tsx';
import { setPassword as setPasswordContract } from '#contract/users';

/** Sets a password by the secret of an invitation or reset mail, which stands behind the # and never reaches a log. */
export function SetPasswordPage() {
  const [token] = useState(() => window.location.hash.slice(1));
  const [password, setPassword] = useState('');
  const save = useMutation({ mutationFn: () => call(setPasswordContract, { body: { token, password } }) });
  useEffect(() => {
    document.title = 'Set your password · Tenderlight';
    window.history.replaceState(null, '', window.location.pathname);
  }, []);
  return (
    <main className="mx-auto w-full max-w-md px-5 py-12">
      <Wordmark />
      <h1 className="mt-8">Set your password</h1>
      {save.isSuccess ? (
        <p className="mt-4" role="status">
          It is set. <Link to="/sign-in">Sign in as {save.data.email}</Link>
        </p>
      ) : (
        <form
          className="mt-6 grid gap-4"
          onSubmit={(event) => {
            event.preventDefault();
            save.mutate();
          }}
        >
          <TextField
            label="New password"
            hint="At least twelve characters; a sentence is good."
            type="password"
            autoComplete="new-password"
            required
            value={password}
            onChange={setPassword}
            error={
              save.error instanceof ProblemError
                ? (save.error.fieldMessage('password') ?? save.error.message)
                : undefined
            }
          />
          <div>
            <Button kind="primary" type="submit" sending={save.isPending}>
              Set password
            </Button>
          </div>
        </form>
      )}
    </main>
  );
}
