import type { TestProject } from 'vitest/node';
import { startTestMariadb, type TestServer } from './mariadb.ts';

declare module 'vitest' {
  interface ProvidedContext {
    mariadb: { readonly port: number; readonly socket: string };
  }
}

let server: Promise<TestServer> | undefined;
let users = 0;

/** One private MariaDB for the whole run, however many projects ask for it; it ends with the last of them. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  users += 1;
  server ??= startTestMariadb();
  const { port, socket } = await server;
  project.provide('mariadb', { port, socket });
  return async () => {
    users -= 1;
    if (users > 0) return;
    const running = server;
    server = undefined;
    await (await running)?.stop();
  };
}
