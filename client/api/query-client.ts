import { QueryClient } from '@tanstack/react-query';
import { ProblemError } from './problem-error.ts';

/** Refusals are answers and are not asked again; only a silent network is, twice. */
export function createQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: {
      queries: {
        staleTime: 10_000,
        refetchOnWindowFocus: true,
        retry: (failures, error) =>
          failures < 2 && error instanceof ProblemError && (error.status === 0 || error.status === 503),
      },
      mutations: { retry: false },
    },
  });
}
