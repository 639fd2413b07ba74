import type { Knex } from 'knex';
import { runStatements } from './statements.ts';

/** Patients, prescriptions as typed and normalised, the surgeon's approved plans, price books. */
export async function up(db: Knex): Promise<void> {
  await runStatements(db, [
    `CREATE TABLE patients (
      patient_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      site_id INT UNSIGNED NOT NULL,
      given_name VARCHAR(80) NOT NULL,
      family_name VARCHAR(80) NOT NULL,
      born_on DATE NOT NULL,
      email VARCHAR(254) NULL,
      phone VARCHAR(40) NULL,
      patient_class VARCHAR(30) NOT NULL DEFAULT 'standard',
      created_at DATETIME(3) NOT NULL,
      version INT UNSIGNED NOT NULL DEFAULT 1,
      KEY patients_site_name (site_id, family_name, given_name),
      KEY patients_site_born (site_id, born_on),
      KEY patients_site_email (site_id, email),
      CONSTRAINT patients_site FOREIGN KEY (site_id) REFERENCES sites (site_id)
    )`,
    `CREATE TABLE prescriptions (
      prescription_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      patient_id INT UNSIGNED NOT NULL,
      eye CHAR(2) NOT NULL,
      typed_sphere_md INT NOT NULL,
      typed_cylinder_md INT NULL,
      typed_axis_deg SMALLINT UNSIGNED NULL,
      sphere_md INT NOT NULL,
      cylinder_md INT NOT NULL,
      axis_deg SMALLINT UNSIGNED NULL,
      vertex_mm SMALLINT UNSIGNED NOT NULL,
      refracted_on DATE NOT NULL,
      recorded_by INT UNSIGNED NOT NULL,
      recorded_at DATETIME(3) NOT NULL,
      KEY prescriptions_patient (patient_id, eye, prescription_id),
      CONSTRAINT prescriptions_patient FOREIGN KEY (patient_id) REFERENCES patients (patient_id),
      CONSTRAINT prescriptions_user FOREIGN KEY (recorded_by) REFERENCES users (user_id),
      CONSTRAINT prescriptions_eye CHECK (eye IN ('OD','OS')),
      CONSTRAINT prescriptions_minus_cylinder CHECK (cylinder_md <= 0),
      CONSTRAINT prescriptions_axis CHECK ((axis_deg IS NULL) = (cylinder_md = 0) AND (axis_deg IS NULL OR axis_deg BETWEEN 1 AND 180))
    )`,
    `CREATE TABLE approved_plans (
      approved_plan_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      patient_id INT UNSIGNED NOT NULL,
      od_procedures JSON NOT NULL,
      os_procedures JSON NOT NULL,
      surgeon_user_id INT UNSIGNED NOT NULL,
      approved_at DATETIME(3) NOT NULL,
      approved_on DATE NOT NULL,
      expires_on DATE NOT NULL,
      KEY approved_plans_patient (patient_id, approved_plan_id),
      CONSTRAINT approved_plans_patient FOREIGN KEY (patient_id) REFERENCES patients (patient_id),
      CONSTRAINT approved_plans_surgeon FOREIGN KEY (surgeon_user_id) REFERENCES users (user_id),
      CONSTRAINT approved_plans_expiry CHECK (expires_on >= approved_on)
    )`,
    `CREATE TABLE price_books (
      price_book_id INT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
      clinic_id INT UNSIGNED NOT NULL,
      site_id INT UNSIGNED NULL,
      version_no INT UNSIGNED NOT NULL,
      state VARCHAR(12) NOT NULL,
      currency CHAR(3) NOT NULL,
      in_force_on DATE NULL,
      content JSON NOT NULL,
      costs JSON NOT NULL,
      content_hash CHAR(64) NOT NULL,
      created_by INT UNSIGNED NOT NULL,
      created_at DATETIME(3) NOT NULL,
      UNIQUE KEY price_books_version (clinic_id, version_no),
      CONSTRAINT price_books_clinic FOREIGN KEY (clinic_id) REFERENCES clinics (clinic_id),
      CONSTRAINT price_books_site FOREIGN KEY (site_id) REFERENCES sites (site_id),
      CONSTRAINT price_books_user FOREIGN KEY (created_by) REFERENCES users (user_id),
      CONSTRAINT price_books_state CHECK (state IN ('draft','in_force')),
      CONSTRAINT price_books_in_force CHECK ((state = 'draft') OR (in_force_on IS NOT NULL))
    )`,
  ]);
}
