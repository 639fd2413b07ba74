import { describe, expect, test } from 'vitest';
import { csvOf } from '#client/ui/csv.ts';
import { pairWords } from '#client/ui/pair-mark.tsx';

describe('pairWords', () => {
  test('both eyes · right before left, money beside the eye', () => {
    expect(
      pairWords([
        { eye: 'OS', state: 'planned', money: 'half' },
        { eye: 'OD', state: 'done', money: 'whole' },
      ]),
    ).toBe('right eye done and paid, left eye planned, part paid');
  });
  test('a cancelled eye and an absent one · are said as such', () => {
    expect(pairWords([{ eye: 'OD', state: 'cancelled', money: 'half' }])).toBe('right eye cancelled');
    expect(pairWords([])).toBe('no eye');
  });
});

describe('csvOf (RFC 4180)', () => {
  test('quotes, commas and line ends · are quoted; lines end with CRLF', () => {
    expect(
      csvOf([
        ['a', 'say "so"'],
        ['1,5', 'x\ny'],
      ]),
    ).toBe('a,"say ""so"""\r\n"1,5","x\ny"\r\n');
  });
  test('cells that a spreadsheet would run · are defused, numbers are not', () => {
    expect(csvOf([['=1+1', '@x', '+x', '-x', '-3.20']])).toBe("'=1+1,'@x,'+x,'-x,-3.20\r\n");
  });
});
