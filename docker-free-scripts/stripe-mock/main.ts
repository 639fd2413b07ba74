import { readConfiguration } from './configuration.ts';
import { startStripeMock } from './start-stripe-mock.ts';

/**
 * Runs the stand-in as a process. One line of JSON on standard output tells that it is ready and where;
 * SIGTERM and SIGINT stop it after the state is written.
 */
try {
  const running = await startStripeMock(readConfiguration(process.argv.slice(2), process.env));
  process.stdout.write(
    `${JSON.stringify({ ready: true, api: running.apiUrl, control: running.controlUrl })}\n`,
  );
  for (const signal of ['SIGTERM', 'SIGINT'] as const) {
    process.once(signal, () => {
      running.stop().then(
        () => process.exit(0),
        () => process.exit(1),
      );
    });
  }
} catch (error) {
  process.stderr.write(
    `The payment stand-in cannot start: ${error instanceof Error ? error.message : error}\n`,
  );
  process.exitCode = 1;
}
