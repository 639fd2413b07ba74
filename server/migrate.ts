import { migrateLatest } from '#server/platform/migrate';

/** Command: migrates DATABASE_OWNER_URL and grants to the user of DATABASE_URL. Exit 1 with a sentence on failure. */
const ownerUrl = process.env.DATABASE_OWNER_URL;
const appUrl = process.env.DATABASE_URL;
if (!ownerUrl || !appUrl) {
  process.stderr.write('Migrating needs DATABASE_OWNER_URL and DATABASE_URL.\n');
  process.exit(1);
}
try {
  const app = new URL(appUrl);
  await migrateLatest(ownerUrl, {
    user: decodeURIComponent(app.username),
    host: process.env.DATABASE_APP_HOST || app.hostname,
  });
} catch (error) {
  process.stderr.write(
    `The database could not be migrated: ${error instanceof Error ? error.message : String(error)}\n`,
  );
  process.exit(1);
}
