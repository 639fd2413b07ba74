import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { Queue } from '#stand-ins/stripe-mock/clock/queue';
import { schedule } from '#stand-ins/stripe-mock/clock/tasks';
import { createService, type Service } from '#stand-ins/stripe-mock/service';
import { openStoreInMemory } from '#stand-ins/stripe-mock/state/log-file';

const START_MS = Date.parse('2026-03-02T09:00:00Z');
const HOUR_MS = 3_600_000;

let service: Service;
let queue: Queue;
/** What ran, with the time it saw in hours after the start. */
let ran: (readonly [string, number])[];
const see = (subject: string) => ran.push([subject, (service.clock.nowMs() - START_MS) / HOUR_MS]);
const plan = (subject: string, hours: number, kind: 'attach_fee' | 'deliver' = 'attach_fee') =>
  service.store.transact(() => schedule(service, kind, subject, START_MS + hours * HOUR_MS));

beforeEach(() => {
  const { store } = openStoreInMemory();
  service = createService(store, { secretKey: 'k', currency: 'eur', webhookUrl: null, webhookSecret: null });
  service.clock.place(START_MS, true);
  ran = [];
  queue = new Queue(service, {
    settle: ({ subject }) => see(subject),
    deliver: async (task) => {
      await Promise.resolve();
      see(task.subject);
      service.store.transact(() => service.store.remove('tasks', task.id));
    },
  });
});
afterEach(() => queue.stop());

describe('The queue', () => {
  test('time moved · everything due runs in order and sees its own time, deliveries too', async () => {
    plan('late', 5);
    plan('letter', 3, 'deliver');
    plan('early', 1);
    plan('later still', 9);
    await queue.moveTo(START_MS + 6 * HOUR_MS, () => service.clock.place(START_MS + 6 * HOUR_MS, true));
    expect(ran).toEqual([
      ['early', 1],
      ['letter', 3],
      ['late', 5],
    ]);
    expect(service.store.all('tasks').map(({ subject }) => subject)).toEqual(['later still']);
  });

  test('found overdue, as after days of standing still · changes bear the time they were due, deliveries go out now', async () => {
    plan('second', 2);
    plan('first', 1);
    plan('letter', 1, 'deliver');
    service.clock.place(START_MS + 50 * HOUR_MS, true);
    await queue.idle();
    expect(ran).toEqual([
      ['first', 1],
      ['second', 2],
      ['letter', 50],
    ]);
  });

  test('same instant · in the order of planning; a move back · runs nothing', async () => {
    plan('a', 0);
    plan('b', 0);
    await queue.moveTo(START_MS - HOUR_MS, () => service.clock.place(START_MS - HOUR_MS, true));
    plan('c', 0);
    await queue.idle();
    expect(ran.map(([subject]) => subject)).toEqual(['a', 'b']);
  });

  test('a task that fails · changes nothing and stays', async () => {
    plan('broken', 0);
    const failing = new Queue(service, {
      settle: () => {
        service.store.put('customers', {
          id: 'half-done',
          seq: 1,
          created: 0,
          email: null,
          name: null,
          description: null,
          phone: null,
          metadata: {},
        });
        throw new Error('broken');
      },
      deliver: () => Promise.resolve(),
    });
    await expect(failing.idle()).rejects.toThrow('broken');
    expect(service.store.all('customers')).toEqual([]);
    expect(service.store.all('tasks')).toHaveLength(1);
  });
});
