import type { Knex } from 'knex';
import * as house from './20260105090000_create_house.ts';
import * as ledger from './20260105090100_create_ledger.ts';
import * as patientsAndCatalogue from './20260105090200_create_patients_and_catalogue.ts';
import * as quotesAndCourses from './20260105090300_create_quotes_and_courses.ts';
import * as payments from './20260105090400_create_payments.ts';
import * as fees from './20260105090500_create_fees.ts';

/** Only ever forwards: a mistake is mended by a new migration. */
interface Migration {
  up(db: Knex): Promise<void>;
}

/** In order; names without an extension, so that the compiled and the source tree agree. */
const MIGRATIONS: Readonly<Record<string, Migration>> = {
  '20260105090000_create_house': house,
  '20260105090100_create_ledger': ledger,
  '20260105090200_create_patients_and_catalogue': patientsAndCatalogue,
  '20260105090300_create_quotes_and_courses': quotesAndCourses,
  '20260105090400_create_payments': payments,
  '20260105090500_create_fees': fees,
};

/** The static list Knex migrates from. */
export const migrationSource: Knex.MigrationSource<string> = {
  getMigrations: () => Promise.resolve(Object.keys(MIGRATIONS)),
  getMigrationName: (name) => name,
  getMigration: (name) => {
    const migration = MIGRATIONS[name];
    if (!migration) return Promise.reject(new Error(`No such migration: ${name}`));
    return Promise.resolve({
      up: (db) => migration.up(db),
      down: () => Promise.reject(new Error('Migrations only go forwards')),
    });
  },
};
