/**
 * What History filters by. The new columns of `records` only repeat what the record's own bytes say (who, and which
 * measurement of its place's day), so that an index can find it; the bytes in the ledger are not touched. Rows from before
 * get them here, the one time that the guard against changes is lifted; it is back before the step ends, and a step that
 * was killed runs again from its beginning.
 */
const columns = `ALTER TABLE records
  ADD COLUMN IF NOT EXISTS by_id VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin NULL,
  ADD COLUMN IF NOT EXISTS attempt INT UNSIGNED NULL,
  ADD COLUMN IF NOT EXISTS attempt_band TINYINT UNSIGNED AS (LEAST(attempt, 9)) VIRTUAL`

const rowsFromBefore = [
  'DROP TRIGGER IF EXISTS records_no_update',
  `UPDATE records r JOIN ledger_leaves l ON l.id = r.leaf_id
    SET r.by_id = JSON_VALUE(CONVERT(l.body USING utf8mb4), '$.by.id') WHERE r.by_id IS NULL`,
  `UPDATE records r JOIN (
      SELECT id, ROW_NUMBER() OVER (
        PARTITION BY unit_id, channel, range_id, kind, DATE(recorded_at) ORDER BY recorded_at, id) AS nth
      FROM records WHERE kind IN ('trim', 'verify')) counted ON counted.id = r.id
    SET r.attempt = counted.nth WHERE r.attempt IS NULL`,
  `CREATE OR REPLACE TRIGGER records_no_update BEFORE UPDATE ON records FOR EACH ROW
    SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'Recorded rows of records are never changed'`,
]

/** Each ends in time and id, so that a page of what it finds needs no sorting. */
const indexes = `ALTER TABLE records
  ADD INDEX IF NOT EXISTS records_in_lot (lot, recorded_at, id),
  ADD INDEX IF NOT EXISTS records_by (by_id, recorded_at, id),
  ADD INDEX IF NOT EXISTS records_revision (design, revision, recorded_at, id),
  ADD INDEX IF NOT EXISTS records_attempt (attempt_band, recorded_at, id)`

const dashed = (text: string) =>
  `REPLACE(REPLACE(REPLACE(REPLACE(${text}, '_', '-'), '.', '-'), '/', '-'), ' ', '-')`
/** What stands behind the first separator of a text; null when it has none. */
const behind = (text: string) =>
  `IF(LOCATE('-', ${dashed(text)}) = 0, NULL, NULLIF(SUBSTRING(${text}, LOCATE('-', ${dashed(text)}) + 1), ''))`

/** Parts of serials, so that `031` finds DBS-24170-031 by an index: people know the end of a serial, or its lot. */
const serialParts = ['serial', 'tail_1', 'tail_2'].map(
  (from, i) => `ALTER TABLE units
    ADD COLUMN IF NOT EXISTS tail_${i + 1} VARCHAR(64) CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin
      AS (${behind(from)}) VIRTUAL,
    ADD INDEX IF NOT EXISTS units_tail_${i + 1} (tail_${i + 1})`,
)

export const historyColumns = [columns, ...rowsFromBefore, indexes, ...serialParts]
