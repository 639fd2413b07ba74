export * from './day.ts';
export * from './denominations.ts';
export * from './till.ts';
