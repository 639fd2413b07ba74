import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useSession } from '#client/api/session.ts';
import type { TillView } from '#contract/tills';
import type { Minor } from '#domain/money/index';

/** One shift of a till. */
export type Session = TillView['sessions'][number];

/** What every till of a site shares. */
export interface Answer {
  readonly currency: string;
  readonly denominations: readonly { readonly valueMinor: Minor; readonly kind: 'note' | 'coin' }[];
}

/** Everything that changes a till is fetched anew afterwards. */
export function useTillChange<Input>(run: (input: Input) => Promise<unknown>, done?: () => void) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: run,
    onSuccess: async () => {
      await client.invalidateQueries({ queryKey: ['tills'] });
      await client.invalidateQueries({ queryKey: ['day'] });
      done?.();
    },
  });
}

/** Whether the person may open, count and close tills. */
export function useMayRun(): boolean {
  const roles = useSession().person?.roles ?? [];
  return roles.includes('front_desk') || roles.includes('manager');
}
