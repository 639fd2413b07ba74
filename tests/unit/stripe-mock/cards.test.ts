import { describe, expect, test } from 'vitest';
import { behaviourOf, declineOf, hasValidCheckDigit } from '#stand-ins/stripe-mock/objects/cards';
import { EMPTY_FORM, readCardForm } from '#stand-ins/stripe-mock/page/card-form';

const NOW = Date.parse('2026-03-31T23:59:59Z');
const FORM = {
  email: 'ana@example.test',
  number: '4242-4242 4242 4242',
  expiry: '04/26',
  code: '123',
  name: 'Ana',
};

describe('hasValidCheckDigit', () => {
  // Source: ISO/IEC 7812, the usual worked example.
  test('79927398713 · valid, 79927398710 · not', () => {
    expect([hasValidCheckDigit('79927398713'), hasValidCheckDigit('79927398710')]).toEqual([true, false]);
  });
});

describe('A card number', () => {
  test('not among the test numbers · is declined, whatever it is', () => {
    expect(behaviourOf('4111111111111111')).toBe('unknown');
    expect(declineOf('unknown')?.code).toBe('card_declined');
  });
});

describe('readCardForm', () => {
  test('spaces and dashes · are no part of the number', () => {
    const form = readCardForm(FORM, false, NOW);
    expect(form).toEqual({
      ok: true,
      entry: {
        number: '4242424242424242',
        expMonth: 4,
        expYear: 2026,
        payer: { email: 'ana@example.test', name: 'Ana' },
      },
    });
  });

  test.each([
    ['04/26', true],
    ['4 / 2026', true],
    ['0426', true],
    ['03/26', true],
    ['02/26', false],
    ['00/30', false],
    ['13/30', false],
    ['soon', false],
  ])('expiry %s on the last day of March 2026 · accepted: %s', (expiry, accepted) => {
    expect(readCardForm({ ...FORM, expiry }, false, NOW).ok).toBe(accepted);
  });

  test('nothing filled in · complains of every field, but not of an address known already', () => {
    const complaints = (emailGiven: boolean) => {
      const form = readCardForm(EMPTY_FORM, emailGiven, NOW);
      return form.ok ? [] : Object.keys(form.complaints).sort();
    };
    expect(complaints(false)).toEqual(['code', 'email', 'expiry', 'name', 'number']);
    expect(complaints(true)).toEqual(['code', 'expiry', 'name', 'number']);
  });
});
