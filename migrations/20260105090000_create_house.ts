import type { Knex } from 'knex';
import { runStatements } from './statements.ts';

/** Clinic, sites, people, sessions, audit trail, approvals, outbox, live hints. */
export async function up(db: Knex): Promise<void> {
  await runStatements(db, [
    `CREATE TABLE clinics (
      clinic_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      name VARCHAR(120) NOT NULL,
      currency CHAR(3) NOT NULL,
      locale VARCHAR(20) NOT NULL,
      address VARCHAR(300) NOT NULL,
      created_at DATETIME(3) NOT NULL
    )`,
    `CREATE TABLE clinic_settings (
      clinic_setting_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      clinic_id INT UNSIGNED NOT NULL,
      name VARCHAR(60) NOT NULL,
      value JSON NOT NULL,
      effective_on DATE NOT NULL,
      recorded_at DATETIME(3) NOT NULL,
      UNIQUE KEY clinic_settings_once (clinic_id, name, effective_on),
      CONSTRAINT clinic_settings_clinic FOREIGN KEY (clinic_id) REFERENCES clinics (clinic_id)
    )`,
    `CREATE TABLE sites (
      site_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      clinic_id INT UNSIGNED NOT NULL,
      code VARCHAR(6) NOT NULL,
      name VARCHAR(120) NOT NULL,
      address VARCHAR(300) NOT NULL,
      zone VARCHAR(60) NOT NULL,
      opened_on DATE NOT NULL,
      UNIQUE KEY sites_code (code),
      CONSTRAINT sites_clinic FOREIGN KEY (clinic_id) REFERENCES clinics (clinic_id)
    )`,
    `CREATE TABLE users (
      user_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      email VARCHAR(254) NOT NULL,
      name VARCHAR(120) NOT NULL,
      password_hash VARCHAR(200) NULL,
      state VARCHAR(12) NOT NULL,
      epoch INT UNSIGNED NOT NULL DEFAULT 1,
      created_at DATETIME(3) NOT NULL,
      left_at DATETIME(3) NULL,
      UNIQUE KEY users_email (email),
      CONSTRAINT users_state CHECK (state IN ('invited','active','left'))
    )`,
    `CREATE TABLE user_roles (
      user_id INT UNSIGNED NOT NULL,
      role VARCHAR(16) NOT NULL,
      PRIMARY KEY (user_id, role),
      CONSTRAINT user_roles_user FOREIGN KEY (user_id) REFERENCES users (user_id),
      CONSTRAINT user_roles_role CHECK (role IN ('counsellor','front_desk','surgeon','manager','auditor'))
    )`,
    `CREATE TABLE user_sites (
      user_id INT UNSIGNED NOT NULL,
      site_id INT UNSIGNED NOT NULL,
      PRIMARY KEY (user_id, site_id),
      CONSTRAINT user_sites_user FOREIGN KEY (user_id) REFERENCES users (user_id),
      CONSTRAINT user_sites_site FOREIGN KEY (site_id) REFERENCES sites (site_id)
    )`,
    `CREATE TABLE user_invitations (
      user_invitation_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      user_id INT UNSIGNED NOT NULL,
      purpose VARCHAR(12) NOT NULL,
      token_hash BINARY(32) NOT NULL,
      expires_at DATETIME(3) NOT NULL,
      used_at DATETIME(3) NULL,
      created_at DATETIME(3) NOT NULL,
      UNIQUE KEY user_invitations_token (token_hash),
      CONSTRAINT user_invitations_user FOREIGN KEY (user_id) REFERENCES users (user_id),
      CONSTRAINT user_invitations_purpose CHECK (purpose IN ('invitation','reset'))
    )`,
    `CREATE TABLE sessions (
      sid_hash BINARY(32) PRIMARY KEY,
      data JSON NOT NULL,
      expires_at DATETIME(3) NOT NULL,
      KEY sessions_expires_at (expires_at)
    )`,
    `CREATE TABLE rate_counters (
      counter_key VARCHAR(120) COLLATE utf8mb4_bin NOT NULL,
      window_start DATETIME(3) NOT NULL,
      hits INT UNSIGNED NOT NULL,
      expires_at DATETIME(3) NOT NULL,
      PRIMARY KEY (counter_key, window_start),
      KEY rate_counters_expires_at (expires_at)
    )`,
    `CREATE TABLE audit_rows (
      audit_row_id BIGINT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      recorded_at DATETIME(3) NOT NULL,
      actor_kind VARCHAR(8) NOT NULL,
      user_id INT UNSIGNED NULL,
      action VARCHAR(60) NOT NULL,
      subject_type VARCHAR(40) NOT NULL,
      subject_id VARCHAR(64) NOT NULL,
      site_id INT UNSIGNED NULL,
      came_from VARCHAR(64) NOT NULL,
      values_digest BINARY(32) NOT NULL,
      KEY audit_rows_subject (subject_type, subject_id),
      KEY audit_rows_user (user_id, recorded_at),
      CONSTRAINT audit_rows_user FOREIGN KEY (user_id) REFERENCES users (user_id),
      CONSTRAINT audit_rows_actor CHECK (actor_kind IN ('staff','patient','system'))
    )`,
    `CREATE TABLE audit_values (
      audit_row_id BIGINT UNSIGNED PRIMARY KEY,
      before_value JSON NULL,
      after_value JSON NULL,
      erased_at DATETIME(3) NULL,
      CONSTRAINT audit_values_row FOREIGN KEY (audit_row_id) REFERENCES audit_rows (audit_row_id)
    )`,
    `CREATE TABLE audit_seals (
      audit_seal_id BIGINT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      subject_table VARCHAR(40) NOT NULL,
      subject_id BIGINT UNSIGNED NOT NULL,
      subject_digest BINARY(32) NOT NULL,
      previous_hash BINARY(32) NOT NULL,
      seal_hash BINARY(32) NOT NULL,
      sealed_at DATETIME(3) NOT NULL,
      UNIQUE KEY audit_seals_subject (subject_table, subject_id),
      UNIQUE KEY audit_seals_previous (previous_hash)
    )`,
    `CREATE TABLE approvals (
      approval_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      kind VARCHAR(40) NOT NULL,
      subject_type VARCHAR(40) NOT NULL,
      subject_id BIGINT UNSIGNED NOT NULL,
      site_id INT UNSIGNED NOT NULL,
      amount_minor BIGINT NULL,
      reason VARCHAR(1000) NOT NULL,
      payload JSON NOT NULL,
      state VARCHAR(10) NOT NULL,
      requested_by INT UNSIGNED NOT NULL,
      requested_at DATETIME(3) NOT NULL,
      decided_by INT UNSIGNED NULL,
      decided_at DATETIME(3) NULL,
      decision_note VARCHAR(1000) NULL,
      open_subject VARCHAR(110) AS (IF(state = 'asked', CONCAT(kind, ':', subject_type, ':', subject_id), NULL)) PERSISTENT,
      UNIQUE KEY approvals_one_open (open_subject),
      KEY approvals_site_state (site_id, state),
      CONSTRAINT approvals_site FOREIGN KEY (site_id) REFERENCES sites (site_id),
      CONSTRAINT approvals_requested_by FOREIGN KEY (requested_by) REFERENCES users (user_id),
      CONSTRAINT approvals_decided_by FOREIGN KEY (decided_by) REFERENCES users (user_id),
      CONSTRAINT approvals_two_people CHECK (decided_by IS NULL OR decided_by <> requested_by),
      CONSTRAINT approvals_state CHECK (state IN ('asked','approved','refused','withdrawn')),
      CONSTRAINT approvals_decided CHECK ((state IN ('approved','refused')) = (decided_by IS NOT NULL))
    )`,
    `CREATE TABLE documents (
      document_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      kind VARCHAR(30) NOT NULL,
      subject_type VARCHAR(40) NOT NULL,
      subject_id BIGINT UNSIGNED NOT NULL,
      site_id INT UNSIGNED NOT NULL,
      filename VARCHAR(120) NOT NULL,
      media_type VARCHAR(60) NOT NULL,
      sha256 BINARY(32) NOT NULL,
      bytes LONGBLOB NOT NULL,
      created_at DATETIME(3) NOT NULL,
      KEY documents_subject (subject_type, subject_id, kind),
      CONSTRAINT documents_site FOREIGN KEY (site_id) REFERENCES sites (site_id)
    )`,
    `CREATE TABLE outbox_mails (
      outbox_mail_id BIGINT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      kind VARCHAR(40) NOT NULL,
      dedupe_key VARCHAR(120) COLLATE utf8mb4_bin NOT NULL,
      recipient VARCHAR(254) NOT NULL,
      subject VARCHAR(200) NOT NULL,
      body_text MEDIUMTEXT NOT NULL,
      body_html MEDIUMTEXT NOT NULL,
      attachments JSON NOT NULL,
      subject_type VARCHAR(40) NOT NULL,
      subject_id BIGINT UNSIGNED NOT NULL,
      state VARCHAR(8) NOT NULL,
      tries INT UNSIGNED NOT NULL DEFAULT 0,
      next_try_at DATETIME(3) NOT NULL,
      last_error VARCHAR(200) NULL,
      created_at DATETIME(3) NOT NULL,
      sent_at DATETIME(3) NULL,
      UNIQUE KEY outbox_mails_once (dedupe_key),
      KEY outbox_mails_due (state, next_try_at),
      KEY outbox_mails_subject (subject_type, subject_id),
      CONSTRAINT outbox_mails_state CHECK (state IN ('waiting','sent','failed'))
    )`,
    `CREATE TABLE live_hints (
      live_hint_id BIGINT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      site_id INT UNSIGNED NOT NULL,
      topic VARCHAR(30) NOT NULL,
      subject_id BIGINT UNSIGNED NULL,
      message VARCHAR(200) NULL,
      created_at DATETIME(3) NOT NULL,
      KEY live_hints_created_at (created_at)
    )`,
    `CREATE TABLE business_days (
      site_id INT UNSIGNED NOT NULL,
      day_on DATE NOT NULL,
      state VARCHAR(8) NOT NULL,
      opened_at DATETIME(3) NOT NULL,
      counted_by INT UNSIGNED NULL,
      counted_at DATETIME(3) NULL,
      closed_at DATETIME(3) NULL,
      PRIMARY KEY (site_id, day_on),
      CONSTRAINT business_days_site FOREIGN KEY (site_id) REFERENCES sites (site_id),
      CONSTRAINT business_days_counted_by FOREIGN KEY (counted_by) REFERENCES users (user_id),
      CONSTRAINT business_days_state CHECK (state IN ('open','counted','closed')),
      CONSTRAINT business_days_closed CHECK ((state = 'closed') = (closed_at IS NOT NULL))
    )`,
    `CREATE TABLE number_series (
      site_id INT UNSIGNED NOT NULL,
      series_year SMALLINT UNSIGNED NOT NULL,
      kind VARCHAR(20) NOT NULL,
      last_no INT UNSIGNED NOT NULL,
      PRIMARY KEY (site_id, series_year, kind),
      CONSTRAINT number_series_site FOREIGN KEY (site_id) REFERENCES sites (site_id)
    )`,
  ]);
}
