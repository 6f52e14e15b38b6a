import { recordedNames } from './001-recorded.ts'

/** Refuses UPDATE and DELETE of recorded rows in the database itself, whoever asks. */
const writeOnce = recordedNames.flatMap((table) =>
  ['UPDATE', 'DELETE'].map(
    (
      verb,
    ) => `CREATE OR REPLACE TRIGGER ${table}_no_${verb.toLowerCase()} BEFORE ${verb} ON ${table} FOR EACH ROW
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'Recorded rows of ${table} are never changed'`,
  ),
)

/** A revision's document and hash stand still once it is no draft, its number always, and its state never goes back. */
const revisionStandsStill = `CREATE OR REPLACE TRIGGER revisions_stand_still BEFORE UPDATE ON revisions FOR EACH ROW
  BEGIN
    IF NEW.design_id <> OLD.design_id OR NEW.number <> OLD.number THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The number of a revision never changes';
    END IF;
    IF OLD.state <> 'draft' AND NOT (NEW.document_hash <=> OLD.document_hash) THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The document of a revision is fixed once it is no draft';
    END IF;
    IF FIELD(NEW.state, 'draft', 'in-review', 'released', 'withdrawn')
       < FIELD(OLD.state, 'draft', 'in-review', 'released', 'withdrawn') THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'The state of a revision never goes back';
    END IF;
  END`

const noRevisionVanishes = `CREATE OR REPLACE TRIGGER revisions_stay BEFORE DELETE ON revisions FOR EACH ROW
  BEGIN
    IF OLD.state <> 'draft' THEN
      SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'Only a draft can be deleted';
    END IF;
  END`

export const guards = [...writeOnce, revisionStandsStill, noRevisionVanishes]
