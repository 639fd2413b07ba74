import { createServer } from 'node:net';

/** A port by the variable that sets it. */
export interface WantedPort {
  readonly variable: string;
  readonly port: number;
  readonly host?: string;
}

/** A variable's port, or the usual one. Throws with a sentence when it is no port. */
export function portFrom(env: NodeJS.ProcessEnv, variable: string, usual: number): number {
  const text = env[variable] || String(usual);
  const port = Number(text);
  if (!/^\d+$/.test(text) || port < 1 || port > 65_535)
    throw new Error(`${variable}: ${text} is not a port from 1 to 65535.`);
  return port;
}

const PATIENCE_MS = 6_000;

/** Throws with a sentence when two want one port, or somebody else holds it and does not let go in a few seconds. */
export async function needFreePorts(wanted: readonly WantedPort[]): Promise<void> {
  for (const { variable, port, host } of wanted) {
    const twin = wanted.find((other) => other.port === port && other.variable !== variable);
    if (twin) throw new Error(`${variable} and ${twin.variable} are both ${port}; give each its own port.`);
    const until = Date.now() + PATIENCE_MS;
    // A start just stopped may still be letting go.
    while (!(await isFree(port, host))) {
      if (Date.now() > until)
        throw new Error(
          `Port ${port} is taken by another program. Stop it, or choose another port: ${variable}=${port + 100} npm start`,
        );
      await new Promise((resolve) => setTimeout(resolve, 200));
    }
  }
}

function isFree(port: number, host = '127.0.0.1'): Promise<boolean> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', (error: NodeJS.ErrnoException) =>
      error.code === 'EADDRINUSE'
        ? resolve(false)
        : reject(new Error(`Nothing can listen on ${host}:${port}: ${error.message}`)),
    );
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/** A port nobody listens on just now. */
export function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() =>
        address !== null && typeof address === 'object'
          ? resolve(address.port)
          : reject(new Error('No port')),
      );
    });
  });
}
