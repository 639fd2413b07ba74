export * from './check-prescription.ts';
export * from './format-prescription.ts';
export * from './parse-prescription.ts';
export * from './prescription.ts';
