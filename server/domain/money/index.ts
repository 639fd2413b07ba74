export * from './currency.ts';
export * from './format-money.ts';
export * from './minor.ts';
export * from './parse-money.ts';
export * from './split.ts';
