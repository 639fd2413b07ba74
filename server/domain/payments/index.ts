export * from './cash.ts';
export * from './checkout.ts';
export * from './take-payment.ts';
export * from './tenders.ts';
export * from './waterfall.ts';
