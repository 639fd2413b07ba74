export * from './allocate.ts';
export * from './recognise.ts';
export * from './run-off.ts';
