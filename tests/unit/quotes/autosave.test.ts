import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { createAutosave, type SaveState } from '#client/features/quotes/autosave.ts';

class Conflict extends Error {}

function harness(save: (draft: string, version: number) => Promise<{ version: number }>) {
  const states: SaveState[] = [];
  const saved: [string, number][] = [];
  const autosave = createAutosave<string>({
    version: 1,
    restMs: 500,
    save: async (draft, version) => {
      saved.push([draft, version]);
      return await save(draft, version);
    },
    isConflict: (error) => error instanceof Conflict,
    onState: (state) => states.push(state),
  });
  return { autosave, states, saved };
}

const next = async (_draft: string, version: number) => ({ version: version + 1 });

describe('autosave', () => {
  beforeEach(() => {
    vi.useFakeTimers();
  });
  afterEach(() => {
    vi.useRealTimers();
  });

  test('while somebody types · waits for the typing to rest and saves the last', async () => {
    const { autosave, states, saved } = harness(next);
    autosave.change('a');
    await vi.advanceTimersByTimeAsync(400);
    autosave.change('ab');
    await vi.advanceTimersByTimeAsync(400);
    expect(saved).toEqual([]);
    await vi.advanceTimersByTimeAsync(200);
    expect(saved).toEqual([['ab', 1]]);
    expect(states).toEqual(['unsaved', 'unsaved', 'saving', 'saved']);
  });

  test('a change during a save · goes out after it, on the version it gave', async () => {
    let answer: (version: { version: number }) => void = () => {};
    const slow = () =>
      new Promise<{ version: number }>((resolve) => {
        answer = resolve;
      });
    const { autosave, saved } = harness((draft, version) => (draft === 'a' ? slow() : next(draft, version)));
    autosave.change('a');
    await vi.advanceTimersByTimeAsync(500);
    autosave.change('b');
    const flushed = autosave.flush();
    expect(saved).toHaveLength(1);
    answer({ version: 2 });
    await expect(flushed).resolves.toBe(3);
    expect(saved).toEqual([
      ['a', 1],
      ['b', 2],
    ]);
  });

  test('somebody else saved meanwhile · nothing more is sent, nothing typed is lost', async () => {
    const { autosave, states, saved } = harness(() => Promise.reject(new Conflict()));
    autosave.change('a');
    await vi.advanceTimersByTimeAsync(500);
    autosave.change('ab');
    await vi.advanceTimersByTimeAsync(5_000);
    expect(saved).toHaveLength(1);
    expect(states.at(-1)).toBe('conflict');
    await expect(autosave.flush()).resolves.toBeUndefined();
  });

  test('the connection was lost · the next change or a flush tries again', async () => {
    let down = true;
    const { autosave, states, saved } = harness((draft, version) =>
      down ? Promise.reject(new Error('offline')) : next(draft, version),
    );
    autosave.change('a');
    await vi.advanceTimersByTimeAsync(500);
    expect(states.at(-1)).toBe('failed');
    down = false;
    await expect(autosave.flush()).resolves.toBe(2);
    expect(saved).toEqual([
      ['a', 1],
      ['a', 1],
    ]);
  });

  test('the page is left · what waits on the clock is not sent any more', async () => {
    const { autosave, saved } = harness(next);
    autosave.change('a');
    autosave.stop();
    await vi.advanceTimersByTimeAsync(5_000);
    expect(saved).toEqual([]);
  });
});
