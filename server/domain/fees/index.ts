export * from './accrue-fee.ts';
export * from './agreement.ts';
export * from './claw-back.ts';
export * from './shared-care.ts';
export * from './statement.ts';
export * from './volume-bands.ts';
