import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { getCourse } from '#contract/courses';
import { getReceipt, takePayment, voidReceipt } from '#contract/payments';
import { countTill, openTill } from '#contract/tills';
import { computeProof } from '#server/features/proof/index';
import { rawRows } from '#server/platform/db';
import {
  acceptByLink,
  type ChainHouse,
  courseOfQuote,
  issueQuoteByHttp,
  makeChainHouse,
} from '#tests/factories/chain';
import type { Agent } from '#tests/support/agent';
import { type TestApp, testApp } from '#tests/support/test-app';
import { freshDatabase } from '#tests/support/test-database';

let app: TestApp;
let house: ChainHouse;
let desk: Agent;
let courseId: number;

beforeAll(async () => {
  app = await testApp({ database: await freshDatabase('voids') });
  house = await makeChainHouse(app);
  const quote = await issueQuoteByHttp(app, house);
  await acceptByLink(app, quote);
  courseId = await courseOfQuote(app, quote.quoteId);
  desk = await app.signIn(house.people.desk.email);
});
afterAll(() => app.stop());

async function take(tender: 'cash' | 'card_machine', amountMinor: number) {
  return await desk.call(takePayment, {
    params: { courseId },
    body: { attemptKey: randomUUID(), payerName: 'Wilma Tester', tenders: [{ tender, amountMinor }] },
  });
}

const undo = (receiptId: number) =>
  desk.tryCall(voidReceipt, { params: { receiptId }, body: { reason: 'keyed under the wrong tender' } });

async function everythingTies(): Promise<void> {
  await app.settle();
  const proof = await computeProof(app.deps, undefined);
  expect(proof.controls.filter((control) => !control.tied)).toEqual([]);
}

describe('voiding a receipt', () => {
  test('on the open day · keeps the number, reverses the entry and frees the debt; a second void is refused', async () => {
    const before = await desk.call(getCourse, { params: { courseId } });
    const receipt = await take('card_machine', 10_000);
    const voided = await undo(receipt.receiptId);
    expect([voided.status, voided.body.voided?.reason]).toEqual([200, 'keyed under the wrong tender']);
    expect((await desk.call(getCourse, { params: { courseId } })).leftMinor).toBe(before.leftMinor);
    const entries = await rawRows<{ corrects: number | null }>(
      app.deps.db,
      "SELECT corrects_entry_id AS corrects FROM journal_entries WHERE source_type = 'receipt_void' AND source_id = ?",
      [receipt.receiptId],
    );
    expect(entries.map((entry) => entry.corrects !== null)).toEqual([true]);
    const again = await undo(receipt.receiptId);
    expect([again.status, again.body.reason]).toEqual([409, 'already_void']);
    await everythingTies();
  });

  test('cash in a till still open · comes back out of it; once the till is counted · it is refused', async () => {
    const till = await desk.call(openTill, {
      params: { tillId: house.site.tillId },
      body: { floatMinor: 20_000 },
    });
    const early = await take('cash', 5_000);
    expect((await undo(early.receiptId)).status).toBe(200);
    await everythingTies();
    const kept = await take('cash', 5_000);
    await desk.call(countTill, {
      params: { tillSessionId: till.tillSessionId },
      body: { count: { '10000': 2, '5000': 1 } },
    });
    const late = await undo(kept.receiptId);
    expect([late.status, late.body.reason]).toEqual([422, 'till_counted']);
    expect((await desk.call(getReceipt, { params: { receiptId: kept.receiptId } })).voided).toBeNull();
    await everythingTies();
  });
});
