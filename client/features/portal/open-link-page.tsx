import { useMutation } from '@tanstack/react-query';
import { useEffect } from 'react';
import { useNavigate, useParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { openLink } from '#contract/portal';
import { DeadLink } from './dead-link.tsx';

/** Exchanges the secret in the address for a cookie at once; the secret does not stay in the address. */
export function OpenLinkPage() {
  const { token = '' } = useParams();
  const navigate = useNavigate();
  const open = useMutation({
    mutationFn: () => call(openLink, { body: { token } }),
    onSuccess: () => void navigate('/my-quote', { replace: true }),
  });
  const { mutate } = open;
  useEffect(() => mutate(), [mutate]);
  if (open.error) return <DeadLink error={open.error} />;
  return <p className="text-soft">Opening your quote…</p>;
}
