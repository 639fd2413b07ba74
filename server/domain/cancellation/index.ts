export * from './allocate-refund.ts';
export * from './cancel.ts';
