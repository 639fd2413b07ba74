export * from './can-be-accepted.ts';
export * from './content.ts';
export * from './draft.ts';
export * from './draft-input.ts';
export * from './parse-rate.ts';
export * from './quote-state.ts';
