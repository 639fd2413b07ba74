import { describe, expect, test } from 'vitest';
import { totalsOf } from '#stand-ins/supervisor/test-totals';

const ROOT = '/some/where';

function file(name: string, statuses: readonly string[], status = 'passed') {
  return {
    name: `${ROOT}/tests/${name}`,
    status,
    assertionResults: statuses.map((each) => ({ status: each })),
  };
}

function lines(files: ReturnType<typeof file>[], clean: boolean): readonly string[] {
  return totalsOf({ testResults: files }, ['unit', 'integration'], { root: ROOT, clean }).lines;
}

describe('the totals of a test run', () => {
  test('by project · then one line for all', () => {
    const files = [
      file('unit/a.test.ts', ['passed', 'passed']),
      file('integration/b.test.ts', ['passed', 'failed'], 'failed'),
    ];
    expect(lines(files, false)).toEqual([
      'unit               2 passed     0 failed',
      'integration        1 passed     1 failed',
      '3 passed, 1 failed',
    ]);
  });
  test('a file that could not be read · is one failure', () => {
    expect(lines([file('unit/a.test.ts', [], 'failed')], false).at(-1)).toBe('0 passed, 1 failed');
  });
  test('a file whose clean-up failed after its tests passed · is one failure', () => {
    expect(lines([file('unit/a.test.ts', ['passed'], 'failed')], false).at(-1)).toBe('1 passed, 1 failed');
  });
  test('a run that failed outside every file · is one failure', () => {
    expect(lines([file('unit/a.test.ts', ['passed'])], false).at(-1)).toBe('1 passed, 1 failed');
  });
  test('a project whose name begins like another · keeps its own count', () => {
    expect(lines([file('unit-of-measure/a.test.ts', ['passed'])], true).at(-1)).toBe('0 passed, 0 failed');
  });
});
