const options = 'ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_bin'
const uuid = 'CHAR(36) CHARACTER SET ascii COLLATE ascii_bin'

/** Who wrote and when, to find it by; the words themselves stand in the leaf alone, where any change is found. */
const written = `
    by_id ${uuid} NOT NULL,
    at DATETIME(3) NOT NULL,
    leaf_id BIGINT UNSIGNED NOT NULL UNIQUE`

/** A finding is on a record, or on a lot; `closes` repeats the finding that an answer closes, so that it is closed once. */
const tables = [
  `CREATE TABLE IF NOT EXISTS findings (
    id ${uuid} NOT NULL PRIMARY KEY,
    record_id ${uuid} NULL,
    design VARCHAR(32) NOT NULL,
    lot VARCHAR(32) NULL,${written},
    KEY findings_record (record_id),
    KEY findings_lot (design, lot),
    KEY findings_time (at, id),
    CONSTRAINT findings_record_known FOREIGN KEY (record_id) REFERENCES records (id),
    CONSTRAINT findings_leaf_known FOREIGN KEY (leaf_id) REFERENCES ledger_leaves (id),
    CONSTRAINT findings_subject CHECK (record_id IS NOT NULL OR lot IS NOT NULL)
  ) ${options}`,
  `CREATE TABLE IF NOT EXISTS finding_answers (
    id ${uuid} NOT NULL PRIMARY KEY,
    finding_id ${uuid} NOT NULL,
    closes ${uuid} NULL UNIQUE,${written},
    KEY answers_of_finding (finding_id, at),
    CONSTRAINT answers_finding_known FOREIGN KEY (finding_id) REFERENCES findings (id),
    CONSTRAINT answers_leaf_known FOREIGN KEY (leaf_id) REFERENCES ledger_leaves (id),
    CONSTRAINT answers_close_their_own CHECK (closes IS NULL OR closes = finding_id)
  ) ${options}`,
]

/** Recorded tables of this step, with what 001 says of its own. */
export const findingRecordedNames = ['findings', 'finding_answers'] as const

const writeOnce = findingRecordedNames.flatMap((table) =>
  ['UPDATE', 'DELETE'].map(
    (
      verb,
    ) => `CREATE OR REPLACE TRIGGER ${table}_no_${verb.toLowerCase()} BEFORE ${verb} ON ${table} FOR EACH ROW
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'Recorded rows of ${table} are never changed'`,
  ),
)

export const findingTables = [...tables, ...writeOnce]
