/**
 * Tables whose rows may change. Text is utf8mb4_bin: case and accents matter. A serial is compared without padding,
 * because utf8mb4_bin takes '031' and '031 ' for the same. Times are UTC with milliseconds.
 */
const options = 'ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_bin'
const uuid = 'CHAR(36) CHARACTER SET ascii COLLATE ascii_bin'

export const mutableTables = [
  `CREATE TABLE IF NOT EXISTS people (
    id ${uuid} NOT NULL PRIMARY KEY,
    email VARCHAR(254) NOT NULL,
    email_folded VARCHAR(254) NOT NULL UNIQUE,
    name VARCHAR(80) NOT NULL,
    role VARCHAR(16) NOT NULL,
    password_hash VARCHAR(255) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    created_at DATETIME(3) NOT NULL,
    disabled_at DATETIME(3) NULL
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS sessions (
    sid VARCHAR(64) CHARACTER SET ascii COLLATE ascii_bin NOT NULL PRIMARY KEY,
    expires DATETIME(3) NOT NULL,
    data TEXT NOT NULL,
    KEY sessions_expires (expires)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS stations (
    id ${uuid} NOT NULL PRIMARY KEY,
    name VARCHAR(64) NOT NULL UNIQUE,
    created_at DATETIME(3) NOT NULL,
    retired_at DATETIME(3) NULL
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS tokens (
    id CHAR(8) CHARACTER SET ascii COLLATE ascii_bin NOT NULL PRIMARY KEY,
    secret_hash BINARY(32) NOT NULL,
    name VARCHAR(64) NOT NULL,
    station_id ${uuid} NULL,
    scopes TEXT NOT NULL,
    designs TEXT NULL,
    created_by VARCHAR(80) NOT NULL,
    created_at DATETIME(3) NOT NULL,
    expires_at DATETIME(3) NOT NULL,
    revoked_at DATETIME(3) NULL,
    last_used_at DATETIME(3) NULL,
    KEY tokens_station (station_id),
    CONSTRAINT tokens_station_known FOREIGN KEY (station_id) REFERENCES stations (id)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS designs (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    design_key VARCHAR(32) NOT NULL UNIQUE,
    created_at DATETIME(3) NOT NULL
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS revisions (
    design_id BIGINT UNSIGNED NOT NULL,
    number INT UNSIGNED NOT NULL,
    state VARCHAR(16) NOT NULL,
    title VARCHAR(120) NOT NULL,
    document LONGBLOB NULL,
    document_hash BINARY(32) NOT NULL,
    author_id ${uuid} NULL,
    author VARCHAR(80) NOT NULL,
    created_at DATETIME(3) NOT NULL,
    released_by VARCHAR(80) NULL,
    released_at DATETIME(3) NULL,
    withdrawn_at DATETIME(3) NULL,
    PRIMARY KEY (design_id, number),
    CONSTRAINT revisions_design FOREIGN KEY (design_id) REFERENCES designs (id),
    CONSTRAINT revisions_state CHECK (state IN ('draft','in-review','released','withdrawn')),
    CONSTRAINT revisions_document CHECK ((state = 'draft') = (document IS NOT NULL))
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS lots (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    design_id BIGINT UNSIGNED NOT NULL,
    lot_key VARCHAR(32) NOT NULL,
    revision INT UNSIGNED NOT NULL,
    state VARCHAR(16) NOT NULL,
    created_at DATETIME(3) NOT NULL,
    UNIQUE KEY lots_key (design_id, lot_key),
    CONSTRAINT lots_revision FOREIGN KEY (design_id, revision) REFERENCES revisions (design_id, number)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS units (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    design_id BIGINT UNSIGNED NOT NULL,
    serial VARCHAR(64) CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin NOT NULL,
    UNIQUE KEY units_serial (design_id, serial),
    KEY units_by_serial (serial),
    CONSTRAINT units_design FOREIGN KEY (design_id) REFERENCES designs (id)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS unit_codes (
    unit_id BIGINT UNSIGNED NOT NULL,
    channel VARCHAR(16) CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin NOT NULL,
    range_id VARCHAR(16) NOT NULL,
    state TEXT NOT NULL,
    PRIMARY KEY (unit_id, channel, range_id),
    CONSTRAINT unit_codes_unit FOREIGN KEY (unit_id) REFERENCES units (id)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS counters (
    name VARCHAR(32) NOT NULL PRIMARY KEY,
    next BIGINT UNSIGNED NOT NULL
  ) ${options}`,
  `INSERT INTO counters (name, next) VALUES ('record-number', 1) ON DUPLICATE KEY UPDATE next = next`,
  `CREATE TABLE IF NOT EXISTS settings (
    name VARCHAR(64) NOT NULL PRIMARY KEY,
    value TEXT NOT NULL
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS ledger_head (
    id TINYINT UNSIGNED NOT NULL PRIMARY KEY,
    size BIGINT UNSIGNED NOT NULL,
    root BINARY(32) NOT NULL,
    checkpoint_number BIGINT UNSIGNED NOT NULL,
    checkpoint_size BIGINT UNSIGNED NOT NULL,
    checkpoint_at DATETIME(3) NULL
  ) ${options}`,
  `INSERT INTO ledger_head (id, size, root, checkpoint_number, checkpoint_size)
    VALUES (1, 0, UNHEX(SHA2('', 256)), 0, 0) ON DUPLICATE KEY UPDATE id = id`,
  `CREATE TABLE IF NOT EXISTS ledger_pending (
    leaf_id BIGINT UNSIGNED NOT NULL PRIMARY KEY,
    hash BINARY(32) NOT NULL
  ) ${options}`,
] as const
