import { describe, expect, test } from 'vitest';
import { sourceFiles } from './source-files.ts';

/** What a file of a folder may import beside its own folder: beginnings of specifiers. Bare names are packages. */
interface Rule {
  readonly folder: string;
  readonly may: readonly string[];
}

const RULES: readonly Rule[] = [
  { folder: 'server/domain/money/', may: ['dinero.js'] },
  { folder: 'server/domain/time/', may: ['temporal-polyfill'] },
  { folder: 'server/domain/', may: ['#domain/'] },
  { folder: 'server/contract/', may: ['zod', '#domain/'] },
  {
    folder: 'server/platform/',
    may: [
      '#domain/',
      '#contract/problem',
      '#contract/define',
      '#migrations/index',
      'node:',
      'knex',
      'pino',
      'zod',
    ],
  },
  { folder: 'server/gateways/', may: ['#domain/', '#server/platform/', 'stripe', 'nodemailer', 'node:'] },
  {
    folder: 'server/http/',
    may: ['#contract/', '#domain/', '#server/platform/', 'express', 'helmet', 'multer', 'zod', 'node:'],
  },
  { folder: 'client/ui/', may: ['#domain/', '#client/ui/', 'react', '@tanstack/', 'lucide-react'] },
  { folder: 'client/api/', may: ['#contract/', '#client/api/', 'react', '@tanstack/react-query'] },
];

const FEATURE_ORDER = [
  ['settings', 'audit', 'business-days', 'users', 'approvals', 'patients', 'catalogue'],
  ['ledger'],
  ['quotes'],
  ['courses'],
  ['payments'],
  ['delivery'],
  ['fees'],
  ['tills', 'closing', 'bank'],
  ['documents'],
  ['portal', 'today', 'reports', 'proof'],
];

function allowed(specifier: string, may: readonly string[]): boolean {
  return specifier.startsWith('.') || may.some((beginning) => specifier.startsWith(beginning));
}

describe('what may import what', () => {
  test.each(RULES)('$folder · imports only what the matrix allows', ({ folder, may }) => {
    const more = RULES.filter((rule) => rule.folder !== folder && rule.folder.startsWith(folder)).map(
      (rule) => rule.folder,
    );
    const files = sourceFiles(folder).filter((file) => !more.some((deeper) => file.path.startsWith(deeper)));
    expect(files.length).toBeGreaterThan(0);
    const wrong = files.flatMap((file) =>
      file.imports.filter((each) => !allowed(each, may)).map((each) => `${file.path} → ${each}`),
    );
    expect(wrong).toEqual([]);
  });

  test('relative imports · stay inside their folder', () => {
    const wrong = sourceFiles('server', 'client', 'migrations', 'seeds').flatMap((file) =>
      file.imports
        .filter((each) => each.startsWith('../'))
        .filter((each) => leavesFeature(file.path, each))
        .map((each) => `${file.path} → ${each}`),
    );
    expect(wrong).toEqual([]);
  });

  test('a server feature · imports only from its left, through index.ts', () => {
    const place = new Map(FEATURE_ORDER.flatMap((group, at) => group.map((name) => [name, at] as const)));
    const wrong = sourceFiles('server/features').flatMap((file) => {
      const own = file.path.split('/')[2] ?? '';
      return file.imports.flatMap((specifier) => {
        const [, other, inside] = /^#server\/features\/([^/]+)\/(.+)$/.exec(specifier) ?? [];
        if (other === undefined || other === own) return [];
        const found = inside === 'index' ? [] : [`${file.path} reaches into ${specifier}`];
        if ((place.get(other) ?? 99) > (place.get(own) ?? -1))
          found.push(`${file.path} imports ${other}, which stands to its right`);
        return found;
      });
    });
    expect(wrong).toEqual([]);
  });

  test('a client feature · imports no other feature and no server code but contracts and rules', () => {
    const wrong = sourceFiles('client/features').flatMap((file) => {
      const own = file.path.split('/')[2];
      return file.imports
        .filter(
          (each) =>
            (each.startsWith('#client/features/') && !each.startsWith(`#client/features/${own}/`)) ||
            each.startsWith('#server/'),
        )
        .map((each) => `${file.path} → ${each}`);
    });
    expect(wrong).toEqual([]);
  });

  test('vendor SDKs · are imported by gateways alone', () => {
    const wrong = sourceFiles('server')
      .filter((file) => !file.path.startsWith('server/gateways/'))
      .flatMap((file) =>
        file.imports
          .filter((each) => each === 'stripe' || each === 'nodemailer')
          .map((each) => `${file.path} → ${each}`),
      );
    expect(wrong).toEqual([]);
  });

  test('staff costs · never reach the browser', () => {
    const wrong = sourceFiles('client').flatMap((file) =>
      file.imports
        .filter((each) => each.startsWith('#domain/pricing/costs'))
        .map((each) => `${file.path} → ${each}`),
    );
    expect(wrong).toEqual([]);
  });

  test('the patient’s pages · hold no engine', () => {
    const wrong = sourceFiles('client/features')
      .filter((file) => file.path.startsWith('client/features/portal/'))
      .flatMap((file) =>
        [...file.text.matchAll(/import (?!type)[^;]*from '#domain\/pricing[^']*'/g)].map(
          (match) => `${file.path}: ${match[0]}`,
        ),
      );
    expect(wrong).toEqual([]);
  });
});

/** A relative path may climb within a feature or a domain area, never out of it. */
function leavesFeature(from: string, specifier: string): boolean {
  const depth = from.split('/').length - 1;
  const up = specifier.split('/').filter((part) => part === '..').length;
  const areaDepth =
    from.startsWith('server/features/') ||
    from.startsWith('server/domain/') ||
    from.startsWith('client/features/')
      ? 3
      : 2;
  return depth - up < areaDepth;
}
