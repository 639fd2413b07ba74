import { startMailbox } from './start-mailbox.ts';

/** Command: MAILBOX_SMTP_PORT, MAILBOX_PORT and MAILBOX_DATA; prints one JSON line when it answers, ends on SIGTERM. */
try {
  const mailbox = await startMailbox({
    smtpPort: Number(process.env.MAILBOX_SMTP_PORT ?? 0),
    pagePort: Number(process.env.MAILBOX_PORT ?? 0),
    ...(process.env.MAILBOX_DATA ? { folder: process.env.MAILBOX_DATA } : {}),
  });
  process.stdout.write(`${JSON.stringify({ ready: true, smtp: mailbox.smtpUrl, page: mailbox.pageUrl })}\n`);
  for (const signal of ['SIGTERM', 'SIGINT'] as const) {
    process.once(signal, () => {
      mailbox.stop().then(
        () => process.exit(0),
        () => process.exit(1),
      );
    });
  }
} catch (error) {
  process.stderr.write(
    `The mailbox cannot start: ${error instanceof Error ? error.message : String(error)}\n`,
  );
  process.exitCode = 1;
}
