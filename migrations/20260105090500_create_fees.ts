import type { Knex } from 'knex';
import { runStatements } from './statements.ts';

/** Fee agreements as dated versions, and the lines that accrue under them. */
export async function up(db: Knex): Promise<void> {
  await runStatements(db, [
    `CREATE TABLE fee_agreements (
      fee_agreement_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      surgeon_user_id INT UNSIGNED NOT NULL,
      version_no INT UNSIGNED NOT NULL,
      effective_on DATE NOT NULL,
      terms JSON NOT NULL,
      created_by INT UNSIGNED NOT NULL,
      created_at DATETIME(3) NOT NULL,
      UNIQUE KEY fee_agreements_version (surgeon_user_id, version_no),
      UNIQUE KEY fee_agreements_effective (surgeon_user_id, effective_on),
      CONSTRAINT fee_agreements_surgeon FOREIGN KEY (surgeon_user_id) REFERENCES users (user_id),
      CONSTRAINT fee_agreements_user FOREIGN KEY (created_by) REFERENCES users (user_id)
    )`,
    `CREATE TABLE fee_lines (
      fee_line_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      surgeon_user_id INT UNSIGNED NOT NULL,
      fee_agreement_id INT UNSIGNED NOT NULL,
      site_id INT UNSIGNED NOT NULL,
      course_id INT UNSIGNED NOT NULL,
      eye CHAR(2) NOT NULL,
      kind VARCHAR(12) NOT NULL,
      currency CHAR(3) NOT NULL,
      amount_minor BIGINT NOT NULL,
      earned_on DATE NOT NULL,
      booked_on DATE NOT NULL,
      derivation JSON NOT NULL,
      claws_back_line_id INT UNSIGNED NULL,
      recorded_at DATETIME(3) NOT NULL,
      accrual_course_id INT UNSIGNED AS (IF(kind = 'accrual', course_id, NULL)) PERSISTENT,
      UNIQUE KEY fee_lines_one_accrual (accrual_course_id, eye),
      KEY fee_lines_surgeon (surgeon_user_id, earned_on),
      CONSTRAINT fee_lines_surgeon FOREIGN KEY (surgeon_user_id) REFERENCES users (user_id),
      CONSTRAINT fee_lines_agreement FOREIGN KEY (fee_agreement_id) REFERENCES fee_agreements (fee_agreement_id),
      CONSTRAINT fee_lines_course FOREIGN KEY (course_id, eye) REFERENCES course_eyes (course_id, eye),
      CONSTRAINT fee_lines_claws_back FOREIGN KEY (claws_back_line_id) REFERENCES fee_lines (fee_line_id),
      CONSTRAINT fee_lines_kind CHECK (kind IN ('accrual','clawback')),
      CONSTRAINT fee_lines_amount CHECK ((kind = 'accrual' AND amount_minor >= 0) OR (kind = 'clawback' AND amount_minor <= 0 AND claws_back_line_id IS NOT NULL))
    )`,
    `CREATE TABLE seed_markers (
      name VARCHAR(40) PRIMARY KEY,
      anchor_on DATE NOT NULL,
      completed_at DATETIME(3) NOT NULL
    )`,
  ]);
}
