-- What paper has to say of a caution, a draft and a copy.

-- The site's date on which a caution was acknowledged, and by whom. Null in
-- rows of earlier schemas: the visit's first day and the one who began it stood for them.
ALTER TABLE cautions_seen ADD COLUMN local_date TEXT;
ALTER TABLE cautions_seen ADD COLUMN person BLOB REFERENCES people (id);

-- The appliance that is being worked on; null where the draft is of none.
ALTER TABLE drafts ADD COLUMN appliance BLOB REFERENCES appliances (id);

-- Further copies of a closed record, handed out after the filed original,
-- which is copy 1. The last three columns say what had come after closing
-- when the copy was made, so that it prints the same for ever.
CREATE TABLE copies (
    position      INTEGER PRIMARY KEY,
    visit         BLOB    NOT NULL REFERENCES closed_records (visit),
    number        INTEGER NOT NULL CHECK (number >= 2),
    made          INTEGER NOT NULL,
    local_date    TEXT    NOT NULL,
    minute        INTEGER NOT NULL CHECK (minute BETWEEN 0 AND 1439),
    countersigned INTEGER NOT NULL CHECK (countersigned IN (0, 1)),
    hand_overs    INTEGER NOT NULL CHECK (hand_overs >= 0),
    corrections   INTEGER NOT NULL CHECK (corrections >= 0),
    UNIQUE (visit, number)
) STRICT;

CREATE TRIGGER copies_are_not_changed BEFORE UPDATE ON copies
BEGIN SELECT RAISE(ABORT, 'A copy that was handed out is never changed.'); END;

CREATE TRIGGER copies_are_not_deleted BEFORE DELETE ON copies
BEGIN SELECT RAISE(ABORT, 'A copy that was handed out is never changed.'); END;
