import { describe, expect, test } from 'vitest';
import { ALL_CONTRACTS } from '#contract/index';
import { sourceFiles } from './source-files.ts';

function offenders(files: ReturnType<typeof sourceFiles>, pattern: RegExp): string[] {
  return files.flatMap((file) =>
    file.text
      .split('\n')
      .flatMap((line, index) =>
        pattern.test(line) && !/^\s*(\/\/|\*|\/\*)/.test(line)
          ? [`${file.path}:${index + 1}: ${line.trim()}`]
          : [],
      ),
  );
}

describe('house rules', () => {
  test('SQL · never asks the database for the time', () => {
    expect(
      offenders(
        sourceFiles('server', 'migrations', 'seeds'),
        /\b(NOW|CURDATE|CURRENT_DATE|CURRENT_TIMESTAMP|SYSDATE|UTC_TIMESTAMP)\s*\(|DEFAULT CURRENT_TIMESTAMP/,
      ),
    ).toEqual([]);
  });
  test('money · is never read as a float', () => {
    expect(offenders(sourceFiles('server', 'client', 'seeds'), /\bparseFloat\s*\(|\.toFixed\(/)).toEqual([]);
  });
  test('the clock · is read in one place of the server', () => {
    const files = sourceFiles('server').filter((file) => file.path !== 'server/platform/clock.ts');
    expect(offenders(files, /\bDate\.now\(\)|new Date\(\)/)).toEqual([]);
  });
  test('rules · hold no clock, no randomness and no I/O', () => {
    expect(
      offenders(sourceFiles('server/domain'), /Math\.random|Date\.now|new Date\(\)|process\.|fetch\(/),
    ).toEqual([]);
  });
  test('files · are named in kebab-case', () => {
    const wrong = sourceFiles('server', 'client', 'seeds', 'tests')
      .map((file) => file.path)
      .filter((path) => !/^[a-z0-9/.-]+$/.test(path));
    expect(wrong).toEqual([]);
  });
  test('migrations · are named by their moment', () => {
    const names = sourceFiles('migrations')
      .map((file) => file.path)
      .filter((path) => !/index\.ts$|statements\.ts$/.test(path));
    expect(names.length).toBeGreaterThan(0);
    expect(names.filter((name) => !/^migrations\/\d{14}_[a-z_]+\.ts$/.test(name))).toEqual([]);
  });
});

describe('contracts', () => {
  test('there are some · each with an id and a path of its own', () => {
    expect(ALL_CONTRACTS.length).toBeGreaterThan(30);
    expect(new Set(ALL_CONTRACTS.map((contract) => contract.id)).size).toBe(ALL_CONTRACTS.length);
    expect(new Set(ALL_CONTRACTS.map((contract) => `${contract.method} ${contract.path}`)).size).toBe(
      ALL_CONTRACTS.length,
    );
  });
  test('every parameter in a path · is described', () => {
    const wrong = ALL_CONTRACTS.flatMap((contract) => {
      const inPath = [...contract.path.matchAll(/:(\w+)/g)].map((match) => match[1] ?? '');
      const described = Object.keys(contract.params?.shape ?? {});
      return JSON.stringify([...inPath].sort()) === JSON.stringify([...described].sort())
        ? []
        : [contract.id];
    });
    expect(wrong).toEqual([]);
  });
});
