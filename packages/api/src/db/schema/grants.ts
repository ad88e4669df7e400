/**
 * What the app's login role may do with each table. The security migration is written from this list; a test compares it
 * with the database and fails for a table that is missing here.
 *
 * insert-only   part of the record: read and insert, nothing else, and no TRUNCATE by anyone
 * updatable     working rows: read, insert, update; never deleted
 * changeable    read and update; rows are made by definer functions
 * disposable    rows with an end: read, insert, update, delete (sessions, counters, request keys)
 * read-only     written by migrations or definer functions
 * none          reached through definer functions alone
 */
export type Grant = "insert-only" | "updatable" | "changeable" | "disposable" | "read-only" | "none";

export const grants: Record<string, Grant> = {
  labs: "changeable",
  people: "changeable",
  credentials: "none",
  memberships: "changeable",
  invitations: "updatable",
  deputies: "insert-only",
  bench_devices: "updatable",
  sessions: "disposable",
  password_resets: "none",
  rate_counters: "disposable",
  trail_entries: "insert-only",
  trail_personal: "insert-only",
  signed_heads: "insert-only",
  mail_outbox: "updatable",
  idempotency_keys: "disposable",
  procedures: "insert-only",
  instruments: "updatable",
  configurations: "updatable",
  tolerance_versions: "insert-only",
  standing_entries: "insert-only",
  instrument_events: "insert-only",
  axes: "insert-only",
  sources: "updatable",
  source_certificates: "insert-only",
  number_counters: "updatable",
  checks: "insert-only",
  check_drafts: "updatable",
  check_attempts: "insert-only",
  check_contributors: "insert-only",
  check_events: "insert-only",
  capture_bytes: "insert-only",
  captures: "insert-only",
  capture_readings: "insert-only",
  analyses: "insert-only",
  analysis_drawings: "insert-only",
  submissions: "insert-only",
  signatures: "insert-only",
  reports: "insert-only",
  drift_points: "insert-only",
  alerts: "updatable",
  impact_reviews: "insert-only",
  impact_decisions: "insert-only",
};
