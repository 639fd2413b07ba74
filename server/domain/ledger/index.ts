export * from './build-care.ts';
export * from './build-receipt.ts';
export * from './build-settlement.ts';
export * from './chart.ts';
export * from './course-control.ts';
export * from './entry.ts';
export * from './journal-text.ts';
