export { LiveStreams } from './live.ts';
export { todayRoutes } from './today-routes.ts';
