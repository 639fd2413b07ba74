export * from './tie-payout.ts';
