export { lockDayForClosing, lockOpenDay, todayAt, zoneOf } from './open-day.ts';
