const options = 'ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_bin'
const serial = 'VARCHAR(64) CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin'

/** Who opened and closed a lot and when; which units are reference units, and who said so. */
const columns = [
  `ALTER TABLE lots
    ADD COLUMN IF NOT EXISTS opened_by VARCHAR(80) NULL,
    ADD COLUMN IF NOT EXISTS closed_by VARCHAR(80) NULL,
    ADD COLUMN IF NOT EXISTS closed_at DATETIME(3) NULL,
    ADD INDEX IF NOT EXISTS lots_by_key (lot_key)`,
  `ALTER TABLE units
    ADD COLUMN IF NOT EXISTS reference_by VARCHAR(80) NULL,
    ADD COLUMN IF NOT EXISTS reference_at DATETIME(3) NULL,
    ADD INDEX IF NOT EXISTS units_reference (design_id, reference_at)`,
  // Counting a lot, finding its units, and finding what changed since all read this index alone.
  'ALTER TABLE records ADD INDEX IF NOT EXISTS records_lot (design, lot, unit_id, leaf_id)',
]

const tables = [
  `CREATE TABLE IF NOT EXISTS lot_expected (
    lot_id BIGINT UNSIGNED NOT NULL,
    serial ${serial} NOT NULL,
    PRIMARY KEY (lot_id, serial),
    CONSTRAINT lot_expected_lot FOREIGN KEY (lot_id) REFERENCES lots (id)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS lot_sign_offs (
    lot_id BIGINT UNSIGNED NOT NULL PRIMARY KEY,
    by_name VARCHAR(80) NOT NULL,
    at DATETIME(3) NOT NULL,
    leaf_id BIGINT UNSIGNED NOT NULL UNIQUE,
    CONSTRAINT lot_sign_offs_lot FOREIGN KEY (lot_id) REFERENCES lots (id),
    CONSTRAINT lot_sign_offs_leaf FOREIGN KEY (leaf_id) REFERENCES ledger_leaves (id)
  ) ${options}`,
]

/** Recorded tables of this step, with what 001 says of its own. */
export const lotRecordedNames = ['lot_sign_offs', 'lot_expected'] as const

const writeOnce = lotRecordedNames.flatMap((table) =>
  ['UPDATE', 'DELETE'].map(
    (
      verb,
    ) => `CREATE OR REPLACE TRIGGER ${table}_no_${verb.toLowerCase()} BEFORE ${verb} ON ${table} FOR EACH ROW
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'Recorded rows of ${table} are never changed'`,
  ),
)

/** A lot keeps its revision, and is never open again; signed off is the end. */
const lotSteps = `CREATE OR REPLACE TRIGGER lots_stand_still BEFORE UPDATE ON lots FOR EACH ROW
  BEGIN
    IF NEW.design_id <> OLD.design_id OR NEW.lot_key <> OLD.lot_key OR NEW.revision <> OLD.revision THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The key and the revision of a lot never change';
    END IF;
    IF FIELD(NEW.state, 'open', 'closed', 'signed-off') < FIELD(OLD.state, 'open', 'closed', 'signed-off') THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The state of a lot never goes back';
    END IF;
  END`

export const lotHistory = [...columns, ...tables, ...writeOnce, lotSteps]
