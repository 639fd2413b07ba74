import { createControlClient } from '#stand-ins/stripe-mock/control-client';
import { startStripeMock } from '#stand-ins/stripe-mock/start-stripe-mock';

/** A payment stand-in of a test's own, in memory, with the levers of its control port. */
export async function testStripe() {
  const standIn = await startStripeMock({ currency: 'eur' });
  return { ...standIn, control: createControlClient(standIn.controlUrl) };
}

export type TestStripe = Awaited<ReturnType<typeof testStripe>>;
