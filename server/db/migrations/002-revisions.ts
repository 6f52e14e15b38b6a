/** Who saved, submitted, returned and withdrew a revision and when; its version; what it and its design came from. */
const columns = `ALTER TABLE revisions
  ADD COLUMN IF NOT EXISTS version INT UNSIGNED NOT NULL DEFAULT 1,
  ADD COLUMN IF NOT EXISTS based_on INT UNSIGNED NULL,
  ADD COLUMN IF NOT EXISTS writers TEXT NULL,
  ADD COLUMN IF NOT EXISTS saved_by VARCHAR(80) NULL,
  ADD COLUMN IF NOT EXISTS saved_at DATETIME(3) NULL,
  ADD COLUMN IF NOT EXISTS submitted_by VARCHAR(80) NULL,
  ADD COLUMN IF NOT EXISTS submitted_at DATETIME(3) NULL,
  ADD COLUMN IF NOT EXISTS returned_by VARCHAR(80) NULL,
  ADD COLUMN IF NOT EXISTS returned_at DATETIME(3) NULL,
  ADD COLUMN IF NOT EXISTS return_reason TEXT NULL,
  ADD COLUMN IF NOT EXISTS released_by_author BOOLEAN NOT NULL DEFAULT FALSE,
  ADD COLUMN IF NOT EXISTS withdrawn_by VARCHAR(80) NULL,
  ADD COLUMN IF NOT EXISTS withdraw_reason TEXT NULL`

const origin = `ALTER TABLE designs
  ADD COLUMN IF NOT EXISTS copied_from VARCHAR(32) NULL,
  ADD COLUMN IF NOT EXISTS copied_revision INT UNSIGNED NULL`

/**
 * A revision's document and hash stand still once it is no draft, its number always. Its state goes one step at a time,
 * and back only from review to draft: what was released once stays released or withdrawn.
 */
const revisionSteps = `CREATE OR REPLACE TRIGGER revisions_stand_still BEFORE UPDATE ON revisions FOR EACH ROW
  BEGIN
    IF NEW.design_id <> OLD.design_id OR NEW.number <> OLD.number THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The number of a revision never changes';
    END IF;
    IF OLD.state <> 'draft' AND NOT (NEW.document_hash <=> OLD.document_hash) THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The document of a revision is fixed once it is no draft';
    END IF;
    IF NEW.state <> OLD.state AND CONCAT(OLD.state, ' ', NEW.state) NOT IN
        ('draft in-review', 'in-review draft', 'in-review released', 'released withdrawn') THEN
      IF FIELD(NEW.state, 'draft', 'in-review', 'released', 'withdrawn')
         < FIELD(OLD.state, 'draft', 'in-review', 'released', 'withdrawn') THEN
        SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The state of a revision never goes back';
      END IF;
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The state of a revision never skips a step';
    END IF;
  END`

export const revisionHistory = [columns, origin, revisionSteps]
