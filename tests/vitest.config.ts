import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const root = fileURLToPath(new URL('..', import.meta.url));

/** Long-running projects get their servers from a global set-up; pure ones need none. */
const withServers = { globalSetup: [`${root}tests/support/global-setup.ts`] };

function project(name: string, options: { servers?: boolean; timeoutMs?: number } = {}) {
  return {
    extends: true as const,
    test: {
      name,
      include: [`${root}tests/${name}/**/*.test.{ts,tsx}`],
      testTimeout: options.timeoutMs ?? 20_000,
      hookTimeout: options.timeoutMs ?? 60_000,
      ...(options.servers ? withServers : {}),
    },
  };
}

export default defineConfig({
  root,
  resolve: { conditions: ['tl-source'] },
  ssr: { resolve: { conditions: ['tl-source'] } },
  test: {
    pool: 'forks',
    maxWorkers: 2,
    projects: [
      project('architecture'),
      project('unit'),
      project('reference', { timeoutMs: 60_000 }),
      project('integration', { servers: true, timeoutMs: 60_000 }),
      project('faults', { servers: true, timeoutMs: 180_000 }),
      project('browser', { servers: true, timeoutMs: 240_000 }),
    ],
  },
});
