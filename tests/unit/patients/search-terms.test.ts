import { describe, expect, test } from 'vitest';
import { searchTerms } from '#server/features/patients/search-terms';

describe('search for a patient', () => {
  test.each([
    ['quill', { bornOn: null, email: null, words: ['quill'] }],
    ['Quillfeather, Mara', { bornOn: null, email: null, words: ['Quillfeather', 'Mara'] }],
    ['1996-06-14', { bornOn: '1996-06-14', email: null, words: [] }],
    ['14.6.1996', { bornOn: '1996-06-14', email: null, words: [] }],
    ['14/06/1996 mara', { bornOn: '1996-06-14', email: null, words: ['mara'] }],
    ['quill 14 June 1996', { bornOn: '1996-06-14', email: null, words: ['quill'] }],
    ['14 jun. 1996', { bornOn: '1996-06-14', email: null, words: [] }],
    ['MARA@example.org', { bornOn: null, email: 'mara@example.org', words: [] }],
    ['31.2.1996', { bornOn: null, email: null, words: ['31.2.1996'] }],
    ['   ', { bornOn: null, email: null, words: [] }],
  ])('%s · is taken apart', (text, terms) => {
    expect(searchTerms(text)).toEqual(terms);
  });
});
