export * from './allocate.ts';
