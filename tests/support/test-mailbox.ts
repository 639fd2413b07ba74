import { type Mailbox, startMailbox } from '#stand-ins/mailbox/start-mailbox';

/** A mailbox of a test's own: a real SMTP server that keeps what it gets in memory. Stop it when done. */
export async function testMailbox(): Promise<Mailbox> {
  return await startMailbox();
}
