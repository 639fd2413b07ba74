/** A version's standing in words, with its tone. */
export const STANDING = {
  draft: { words: 'draft', tone: 'plain' },
  waiting: { words: 'waits for its day', tone: 'waiting' },
  in_force: { words: 'in force', tone: 'settled' },
  superseded: { words: 'superseded', tone: 'plain' },
} as const;
