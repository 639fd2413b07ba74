import { describe, expect, test } from 'vitest';
import { ApiError } from '#stand-ins/stripe-mock/api/errors';
import {
  boolean,
  integer,
  listOf,
  mergeMetadata,
  metadata,
  object,
  oneOf,
  type Reader,
  readShape,
  required,
  text,
  timeRange,
  within,
} from '#stand-ins/stripe-mock/api/parameters';

function refusalOf(read: () => unknown): [string | undefined, string | undefined] {
  try {
    read();
  } catch (error) {
    if (error instanceof ApiError) return [error.body.code, error.body.param];
    throw error;
  }
  throw new Error('Expected a refusal');
}

describe('A single value', () => {
  const ACCEPTED: readonly (readonly [string, Reader<unknown>, unknown, unknown])[] = [
    ['an integer', integer(), '-42', -42],
    ['a truth', boolean(), 'true', true],
    ['one of some', oneOf('a', 'b'), 'b', 'b'],
    ['nothing', text(), undefined, undefined],
  ];
  test.each(ACCEPTED)('%s · read from its text', (_, reader, raw, value) => {
    expect(reader(raw, 'p')).toBe(value);
  });

  const REFUSED: readonly (readonly [string, Reader<unknown>, unknown, string])[] = [
    ['a fraction', integer(), '1.5', 'parameter_invalid_integer'],
    ['an exponent', integer(), '1e3', 'parameter_invalid_integer'],
    ['beyond safe integers', integer(), '9007199254740993', 'parameter_invalid_integer'],
    ['below the least', integer({ least: 1 }), '0', 'parameter_invalid_integer'],
    ['above the most', integer({ most: 100 }), '101', 'parameter_invalid_integer'],
    ['neither true nor false', boolean(), 'yes', 'parameter_invalid'],
    ['not among the values', oneOf('a'), 'b', 'parameter_invalid'],
    ['empty', text(), '', 'parameter_invalid_empty'],
    ['too long', text(3), 'four', 'parameter_invalid_string_length'],
    ['a list where a text belongs', text(), ['a'], 'parameter_invalid'],
    ['missing', required(text()), undefined, 'parameter_missing'],
  ];
  test.each(REFUSED)('%s · refused by name', (_, reader, raw, code) => {
    expect(refusalOf(() => reader(raw, 'p'))).toEqual([code, 'p']);
  });
});

describe('A nested value', () => {
  const shape = {
    items: listOf(required(object({ price: required(object({ amount: required(integer()) })) }))),
  };

  test('a list · also when the parser made an object of it', () => {
    const item = { price: { amount: '5' } };
    const read = { items: [{ price: { amount: 5 } }] };
    expect(readShape({ items: [item] }, shape)).toEqual(read);
    expect(readShape({ items: { 0: item } }, shape)).toEqual(read);
  });

  test.each([
    [{ items: [{ price: { amount: 'x' } }] }, 'parameter_invalid_integer', 'items[0][price][amount]'],
    [{ items: [{}] }, 'parameter_missing', 'items[0][price]'],
    [{ items: [{ price: { amount: '1' }, hue: 'red' }] }, 'parameter_unknown', 'items[0][hue]'],
    [{ items: 'none' }, 'parameter_invalid', 'items'],
    [{ constructor: 'x' }, 'parameter_unknown', 'constructor'],
  ])('%j · %s names %s', (raw, code, param) => {
    expect(refusalOf(() => readShape(raw, shape))).toEqual([code, param]);
  });
});

describe('Metadata', () => {
  const change = (raw: unknown) => mergeMetadata({ a: '1', b: '2' }, metadata()(raw, 'metadata'));

  test('values set and unset · the rest stays; an empty text · clears all', () => {
    expect(change({ a: '', c: '3' })).toEqual({ b: '2', c: '3' });
    expect(change(undefined)).toEqual({ a: '1', b: '2' });
    expect(change('')).toEqual({});
  });

  test('too many keys, keys or values too long · refused', () => {
    const many = Object.fromEntries(Array.from({ length: 51 }, (_, index) => [`k${index}`, 'v']));
    expect(refusalOf(() => change(many))[1]).toBe('metadata');
    expect(refusalOf(() => change({ ['k'.repeat(41)]: 'v' }))[0]).toBe('parameter_invalid_string_length');
  });
});

describe('A range of time', () => {
  test.each([
    ['7', [6, 7, 8], [7]],
    [{ gt: '6' }, [6, 7, 8], [7, 8]],
    [{ gte: '7', lt: '8' }, [6, 7, 8], [7]],
    [{ lte: '7' }, [6, 7, 8], [6, 7]],
  ])('%j · keeps what lies within', (raw, all, kept) => {
    const range = timeRange()(raw, 'created');
    expect(all.filter((at) => within(range, at))).toEqual(kept);
  });
});
