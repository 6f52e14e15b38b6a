/** Instruments that measured: a record keeps a copy of what stood here at its time, so rows may change. */
const table = `CREATE TABLE IF NOT EXISTS instruments (
    id VARCHAR(32) NOT NULL PRIMARY KEY,
    serial VARCHAR(64) CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin NOT NULL,
    title VARCHAR(80) NOT NULL,
    gain_ppm DOUBLE NOT NULL,
    offset_v DOUBLE NOT NULL,
    calibrated_on CHAR(10) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    due_on CHAR(10) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    version INT UNSIGNED NOT NULL,
    created_at DATETIME(3) NOT NULL,
    changed_at DATETIME(3) NOT NULL,
    changed_by VARCHAR(80) NOT NULL,
    retired_at DATETIME(3) NULL
  ) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_bin`

export const instrumentTables = [table]
