-- What is done with a cylinder apart from any appliance: bought, weighed where
-- it stands, sent away, returned, lost.
--
-- `position` counts on from that of `entries` and the other way round: the two
-- books together say in what order gas moved.

CREATE TABLE cylinder_entries (
    position    INTEGER PRIMARY KEY,
    id          BLOB    NOT NULL UNIQUE CHECK (length(id) = 16),
    cylinder    BLOB    NOT NULL REFERENCES cylinders (id),
    local_date  TEXT    NOT NULL,
    minute      INTEGER CHECK (minute BETWEEN 0 AND 1439),
    time_zone   TEXT    NOT NULL,
    written     INTEGER NOT NULL,
    device      INTEGER NOT NULL REFERENCES devices (number),
    counter     INTEGER NOT NULL,
    -- The earlier entry that this one strikes.
    strikes     BLOB    REFERENCES cylinder_entries (id),
    act         TEXT    NOT NULL CHECK (act IN ('bought', 'weighed', 'sent away', 'returned', 'lost', 'strike')),
    -- Gas that came or went; zero for a cylinder that was returned quite empty.
    mass        INTEGER CHECK (mass >= 0),
    -- What a purchase brought.
    refrigerant TEXT,
    gas_status  TEXT,
    -- What the cylinder weighed with its tare afterwards, where it was weighed.
    gross_after INTEGER CHECK (gross_after >= 0),
    division    INTEGER CHECK (division >= 0),
    detail      TEXT    NOT NULL,
    CHECK ((mass IS NOT NULL) = (act IN ('bought', 'sent away', 'returned', 'lost'))),
    CHECK ((refrigerant IS NOT NULL) = (act = 'bought')),
    CHECK ((strikes IS NOT NULL) = (act = 'strike')),
    CHECK (gross_after IS NOT NULL OR act <> 'weighed')
) STRICT;
CREATE INDEX cylinder_entries_of ON cylinder_entries (cylinder);
CREATE UNIQUE INDEX cylinder_entries_struck ON cylinder_entries (strikes) WHERE strikes IS NOT NULL;

CREATE TRIGGER cylinder_entries_are_not_changed BEFORE UPDATE ON cylinder_entries
BEGIN SELECT RAISE(ABORT, 'An entry is never changed; strike it by a new one.'); END;

CREATE TRIGGER cylinder_entries_are_not_deleted BEFORE DELETE ON cylinder_entries
BEGIN SELECT RAISE(ABORT, 'An entry is never deleted; strike it by a new one.'); END;
