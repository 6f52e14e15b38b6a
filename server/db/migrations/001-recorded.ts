/**
 * Tables whose rows are written once. The application's account may only SELECT and INSERT; a trigger refuses UPDATE and
 * DELETE to every other account too, root included (who could drop the trigger, which the ledger's receipts then show).
 */
const options = 'ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_bin'
const uuid = 'CHAR(36) CHARACTER SET ascii COLLATE ascii_bin'

export const recordedTables = [
  `CREATE TABLE IF NOT EXISTS design_documents (
    hash BINARY(32) NOT NULL PRIMARY KEY,
    bytes LONGBLOB NOT NULL
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS ledger_leaves (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    kind VARCHAR(16) NOT NULL,
    at DATETIME(3) NOT NULL,
    hash BINARY(32) NOT NULL UNIQUE,
    body LONGBLOB NOT NULL
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS records (
    id ${uuid} NOT NULL PRIMARY KEY,
    number BIGINT UNSIGNED NOT NULL UNIQUE,
    kind VARCHAR(16) NOT NULL,
    unit_id BIGINT UNSIGNED NOT NULL,
    unit VARCHAR(64) CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin NOT NULL,
    channel VARCHAR(16) CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin NOT NULL,
    range_id VARCHAR(16) NOT NULL,
    lot VARCHAR(32) NULL,
    design VARCHAR(32) NOT NULL,
    revision INT UNSIGNED NOT NULL,
    pass INT UNSIGNED NOT NULL,
    follows ${uuid} NULL,
    verdict VARCHAR(20) NULL,
    accepted BOOLEAN NOT NULL,
    gain_error_ppm DOUBLE NULL,
    offset_error_v DOUBLE NULL,
    gain_code INT UNSIGNED NULL,
    offset_code INT UNSIGNED NULL,
    worst_lsb DOUBLE NULL,
    by_name VARCHAR(80) NOT NULL,
    station_id ${uuid} NULL,
    station VARCHAR(64) NULL,
    measured_at DATETIME(3) NULL,
    recorded_at DATETIME(3) NOT NULL,
    leaf_id BIGINT UNSIGNED NOT NULL UNIQUE,
    receipt_key VARCHAR(255) NOT NULL,
    receipt_signature BINARY(64) NOT NULL,
    notices TEXT NOT NULL,
    KEY records_time (recorded_at, id),
    KEY records_unit (unit, recorded_at, id),
    KEY records_design (design, recorded_at, id),
    KEY records_kind (kind, recorded_at, id),
    KEY records_verdict (verdict, recorded_at, id),
    KEY records_station (station_id, recorded_at, id),
    KEY records_place (unit_id, channel, range_id, recorded_at, id),
    KEY records_follows (follows),
    CONSTRAINT records_unit_known FOREIGN KEY (unit_id) REFERENCES units (id),
    CONSTRAINT records_leaf_known FOREIGN KEY (leaf_id) REFERENCES ledger_leaves (id)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS idempotency_keys (
    scope ${uuid} NOT NULL,
    idem_key VARCHAR(128) CHARACTER SET ascii COLLATE ascii_nopad_bin NOT NULL,
    body_hash BINARY(32) NOT NULL,
    record_id ${uuid} NOT NULL,
    PRIMARY KEY (scope, idem_key)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS ledger_entries (
    idx BIGINT UNSIGNED NOT NULL PRIMARY KEY,
    leaf_id BIGINT UNSIGNED NOT NULL UNIQUE
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS ledger_nodes (
    level TINYINT UNSIGNED NOT NULL,
    idx BIGINT UNSIGNED NOT NULL,
    hash BINARY(32) NOT NULL,
    PRIMARY KEY (level, idx)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS ledger_checkpoints (
    number BIGINT UNSIGNED NOT NULL PRIMARY KEY,
    size BIGINT UNSIGNED NOT NULL,
    root BINARY(32) NOT NULL,
    at DATETIME(3) NOT NULL,
    note TEXT NOT NULL
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS ledger_keys (
    number INT UNSIGNED NOT NULL PRIMARY KEY,
    name VARCHAR(200) NOT NULL,
    public_key BINARY(32) NOT NULL,
    at DATETIME(3) NOT NULL
  ) ${options}`,
] as const

export const recordedNames = [
  'design_documents',
  'ledger_leaves',
  'records',
  'idempotency_keys',
  'ledger_entries',
  'ledger_nodes',
  'ledger_checkpoints',
  'ledger_keys',
] as const
