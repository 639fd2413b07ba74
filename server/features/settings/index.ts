export { settingsRoutes } from './settings-routes.ts';
