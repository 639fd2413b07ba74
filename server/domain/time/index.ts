export { dayNumber, dayText } from './civil.ts';
export * from './clinic-date.ts';
export * from './format-day.ts';
export * from './instant.ts';
