import type { Knex } from 'knex';
import { runStatements } from './statements.ts';

/** Journal entries and lines. booked_on stands on the lines too: totals read one covering index. */
export async function up(db: Knex): Promise<void> {
  await runStatements(db, [
    `CREATE TABLE journal_entries (
      journal_entry_id BIGINT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      site_id INT UNSIGNED NOT NULL,
      kind VARCHAR(40) NOT NULL,
      source_type VARCHAR(40) NOT NULL,
      source_id BIGINT UNSIGNED NOT NULL,
      occurred_on DATE NOT NULL,
      booked_on DATE NOT NULL,
      recorded_at DATETIME(3) NOT NULL,
      currency CHAR(3) NOT NULL,
      memo VARCHAR(200) NOT NULL,
      user_id INT UNSIGNED NULL,
      corrects_entry_id BIGINT UNSIGNED NULL,
      UNIQUE KEY journal_entries_source (source_type, source_id, kind),
      KEY journal_entries_day (site_id, booked_on),
      CONSTRAINT journal_entries_day_open FOREIGN KEY (site_id, booked_on) REFERENCES business_days (site_id, day_on),
      CONSTRAINT journal_entries_user FOREIGN KEY (user_id) REFERENCES users (user_id),
      CONSTRAINT journal_entries_corrects FOREIGN KEY (corrects_entry_id) REFERENCES journal_entries (journal_entry_id)
    )`,
    `CREATE TABLE journal_lines (
      journal_line_id BIGINT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      journal_entry_id BIGINT UNSIGNED NOT NULL,
      line_no SMALLINT UNSIGNED NOT NULL,
      site_id INT UNSIGNED NOT NULL,
      booked_on DATE NOT NULL,
      account_code VARCHAR(8) NOT NULL,
      currency CHAR(3) NOT NULL,
      amount_minor BIGINT NOT NULL,
      course_id INT UNSIGNED NULL,
      eye CHAR(2) NULL,
      obligation_id INT UNSIGNED NULL,
      till_id INT UNSIGNED NULL,
      payee_id INT UNSIGNED NULL,
      UNIQUE KEY journal_lines_entry (journal_entry_id, line_no),
      KEY journal_lines_totals (account_code, booked_on, site_id, currency, amount_minor),
      KEY journal_lines_course (course_id, account_code, booked_on, amount_minor),
      KEY journal_lines_till (till_id, account_code, booked_on, amount_minor),
      KEY journal_lines_payee (payee_id, account_code, booked_on, amount_minor),
      CONSTRAINT journal_lines_entry FOREIGN KEY (journal_entry_id) REFERENCES journal_entries (journal_entry_id),
      CONSTRAINT journal_lines_amount CHECK (amount_minor <> 0),
      CONSTRAINT journal_lines_eye CHECK (eye IS NULL OR eye IN ('OD','OS'))
    )`,
  ]);
}
