-- The store's first schema.
--
-- Ids are UUIDs as 16 bytes. Days are the site's local dates as text,
-- instants are UTC milliseconds since 1970, masses are whole numbers of
-- 10^-14 kg. `device` and `counter` say which device wrote a row and the row's
-- number there: with the id they travel with a row that leaves the device.

CREATE TABLE devices (
    number  INTEGER PRIMARY KEY,
    id      BLOB    NOT NULL UNIQUE CHECK (length(id) = 16),
    own     INTEGER NOT NULL CHECK (own IN (0, 1)),
    -- Rows written so far; kept for the own device only.
    counter INTEGER NOT NULL
) STRICT;
CREATE UNIQUE INDEX devices_one_is_own ON devices (own) WHERE own = 1;

-- Registers. Every version is kept with its first day (null: from the
-- beginning); a later row with the same first day replaces an earlier one.
-- `facts` is the version as a document: registers are read whole, never
-- searched by a fact.

CREATE TABLE company_versions (
    position   INTEGER PRIMARY KEY,
    valid_from TEXT,
    reason     TEXT,
    facts      TEXT    NOT NULL,
    written    INTEGER NOT NULL,
    device     INTEGER NOT NULL REFERENCES devices (number),
    counter    INTEGER NOT NULL
) STRICT;

CREATE TABLE people (
    id      BLOB    NOT NULL PRIMARY KEY CHECK (length(id) = 16),
    name    TEXT    NOT NULL UNIQUE CHECK (name <> '')
) STRICT, WITHOUT ROWID;
CREATE TABLE person_versions (
    position   INTEGER PRIMARY KEY,
    person     BLOB    NOT NULL REFERENCES people (id),
    valid_from TEXT,
    reason     TEXT,
    facts      TEXT    NOT NULL,
    written    INTEGER NOT NULL,
    device     INTEGER NOT NULL REFERENCES devices (number),
    counter    INTEGER NOT NULL
) STRICT;
CREATE INDEX person_versions_of ON person_versions (person);

CREATE TABLE sites (
    id      BLOB    NOT NULL PRIMARY KEY CHECK (length(id) = 16),
    name    TEXT    NOT NULL UNIQUE CHECK (name <> '')
) STRICT, WITHOUT ROWID;
CREATE TABLE site_versions (
    position   INTEGER PRIMARY KEY,
    site       BLOB    NOT NULL REFERENCES sites (id),
    valid_from TEXT,
    reason     TEXT,
    facts      TEXT    NOT NULL,
    written    INTEGER NOT NULL,
    device     INTEGER NOT NULL REFERENCES devices (number),
    counter    INTEGER NOT NULL
) STRICT;
CREATE INDEX site_versions_of ON site_versions (site);

CREATE TABLE appliances (
    id      BLOB    NOT NULL PRIMARY KEY CHECK (length(id) = 16),
    site    BLOB    NOT NULL REFERENCES sites (id),
    name    TEXT    NOT NULL CHECK (name <> ''),
    UNIQUE (site, name)
) STRICT, WITHOUT ROWID;
CREATE TABLE appliance_versions (
    position   INTEGER PRIMARY KEY,
    appliance  BLOB    NOT NULL REFERENCES appliances (id),
    valid_from TEXT,
    reason     TEXT,
    facts      TEXT    NOT NULL,
    written    INTEGER NOT NULL,
    device     INTEGER NOT NULL REFERENCES devices (number),
    counter    INTEGER NOT NULL
) STRICT;
CREATE INDEX appliance_versions_of ON appliance_versions (appliance);

CREATE TABLE cylinders (
    id      BLOB    NOT NULL PRIMARY KEY CHECK (length(id) = 16),
    name    TEXT    NOT NULL UNIQUE CHECK (name <> '')
) STRICT, WITHOUT ROWID;
CREATE TABLE cylinder_versions (
    position   INTEGER PRIMARY KEY,
    cylinder   BLOB    NOT NULL REFERENCES cylinders (id),
    valid_from TEXT,
    reason     TEXT,
    facts      TEXT    NOT NULL,
    written    INTEGER NOT NULL,
    device     INTEGER NOT NULL REFERENCES devices (number),
    counter    INTEGER NOT NULL
) STRICT;
CREATE INDEX cylinder_versions_of ON cylinder_versions (cylinder);

CREATE TABLE instruments (
    id      BLOB    NOT NULL PRIMARY KEY CHECK (length(id) = 16),
    name    TEXT    NOT NULL UNIQUE CHECK (name <> '')
) STRICT, WITHOUT ROWID;
CREATE TABLE instrument_versions (
    position   INTEGER PRIMARY KEY,
    instrument BLOB    NOT NULL REFERENCES instruments (id),
    valid_from TEXT,
    reason     TEXT,
    facts      TEXT    NOT NULL,
    written    INTEGER NOT NULL,
    device     INTEGER NOT NULL REFERENCES devices (number),
    counter    INTEGER NOT NULL
) STRICT;
CREATE INDEX instrument_versions_of ON instrument_versions (instrument);

-- Visits and their entries.

CREATE TABLE visits (
    position   INTEGER PRIMARY KEY,
    id         BLOB    NOT NULL UNIQUE CHECK (length(id) = 16),
    site       BLOB    NOT NULL REFERENCES sites (id),
    state      TEXT    NOT NULL CHECK (state IN ('open', 'closed', 'imported')),
    local_date TEXT    NOT NULL,
    minute     INTEGER CHECK (minute BETWEEN 0 AND 1439),
    time_zone  TEXT    NOT NULL,
    begun      INTEGER NOT NULL,
    device     INTEGER NOT NULL REFERENCES devices (number),
    counter    INTEGER NOT NULL
) STRICT;
CREATE INDEX visits_of_site ON visits (site, local_date);
CREATE INDEX visits_open ON visits (state) WHERE state = 'open';

CREATE TABLE visit_people (
    visit   BLOB    NOT NULL REFERENCES visits (id),
    number  INTEGER NOT NULL,
    person  BLOB    NOT NULL REFERENCES people (id),
    PRIMARY KEY (visit, number),
    UNIQUE (visit, person)
) STRICT, WITHOUT ROWID;

-- The columns up to `new_full_charge` are all that rates, duties and balances
-- read; `detail` is what paper and screens print besides.
CREATE TABLE entries (
    position        INTEGER PRIMARY KEY,
    id              BLOB    NOT NULL UNIQUE CHECK (length(id) = 16),
    visit           BLOB    NOT NULL REFERENCES visits (id),
    appliance       BLOB    NOT NULL REFERENCES appliances (id),
    local_date      TEXT    NOT NULL,
    minute          INTEGER CHECK (minute BETWEEN 0 AND 1439),
    time_zone       TEXT    NOT NULL,
    written         INTEGER NOT NULL,
    device          INTEGER NOT NULL REFERENCES devices (number),
    counter         INTEGER NOT NULL,
    -- The earlier entry that this one strikes or corrects.
    strikes         BLOB    REFERENCES entries (id),
    job             TEXT,
    act             TEXT    NOT NULL,
    purpose         TEXT,
    mass            INTEGER CHECK (mass > 0),
    cylinder        BLOB    REFERENCES cylinders (id),
    -- What the cylinder weighed with its tare when the transfer was over,
    -- where it was weighed so.
    gross_after     INTEGER CHECK (gross_after >= 0),
    division        INTEGER CHECK (division >= 0),
    hoses           INTEGER CHECK (hoses >= 0),
    result          TEXT,
    scope           TEXT,
    partial         INTEGER CHECK (partial IN (0, 1)),
    running         INTEGER,
    temporary       INTEGER CHECK (temporary IN (0, 1)),
    new_refrigerant TEXT,
    new_full_charge INTEGER CHECK (new_full_charge > 0),
    detail          TEXT    NOT NULL,
    CHECK ((mass IS NOT NULL) = (act IN ('charge', 'recover'))),
    CHECK ((purpose IS NOT NULL) = (act IN ('charge', 'recover'))),
    CHECK ((hoses IS NOT NULL) = (act IN ('charge', 'recover')))
) STRICT;
CREATE INDEX entries_of_visit ON entries (visit);
CREATE INDEX entries_of_appliance ON entries (appliance);
CREATE INDEX entries_of_cylinder ON entries (cylinder) WHERE cylinder IS NOT NULL;
-- An entry is struck at most once: to mend a correction, correct it.
CREATE UNIQUE INDEX entries_struck ON entries (strikes) WHERE strikes IS NOT NULL;

CREATE TABLE cautions_seen (
    visit        BLOB    NOT NULL REFERENCES visits (id),
    caution      TEXT    NOT NULL,
    minute       INTEGER NOT NULL CHECK (minute BETWEEN 0 AND 1439),
    acknowledged INTEGER NOT NULL,
    PRIMARY KEY (visit, caution)
) STRICT, WITHOUT ROWID;

-- Closing. The record is kept as the bytes that were signed.

CREATE TABLE closings (
    visit       BLOB    NOT NULL PRIMARY KEY REFERENCES visits (id),
    closed      INTEGER NOT NULL,
    local_date  TEXT    NOT NULL,
    minute      INTEGER NOT NULL CHECK (minute BETWEEN 0 AND 1439),
    technician  TEXT    NOT NULL,
    counterpart TEXT    NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE closed_records (
    visit       BLOB    NOT NULL PRIMARY KEY REFERENCES visits (id),
    record      BLOB    NOT NULL,
    fingerprint TEXT    NOT NULL CHECK (length(fingerprint) = 64),
    rulebooks   TEXT    NOT NULL,
    program     TEXT    NOT NULL
) STRICT;

-- A signature given after closing, where the representative signs later.
CREATE TABLE countersignatures (
    visit      BLOB    NOT NULL PRIMARY KEY REFERENCES visits (id),
    signed     INTEGER NOT NULL,
    local_date TEXT    NOT NULL,
    minute     INTEGER NOT NULL CHECK (minute BETWEEN 0 AND 1439),
    signature  TEXT    NOT NULL
) STRICT;

CREATE TABLE hand_overs (
    position   INTEGER PRIMARY KEY,
    visit      BLOB    NOT NULL REFERENCES visits (id),
    handed     INTEGER NOT NULL,
    local_date TEXT    NOT NULL,
    minute     INTEGER NOT NULL CHECK (minute BETWEEN 0 AND 1439),
    told       TEXT    NOT NULL CHECK (told <> '')
) STRICT;
CREATE INDEX hand_overs_of ON hand_overs (visit);

-- Beside the ledger.

CREATE TABLE drafts (
    visit  BLOB    NOT NULL REFERENCES visits (id),
    action TEXT    NOT NULL,
    body   TEXT    NOT NULL,
    saved  INTEGER NOT NULL,
    PRIMARY KEY (visit, action)
) STRICT, WITHOUT ROWID;

CREATE TABLE settings (
    key   TEXT NOT NULL PRIMARY KEY,
    value TEXT NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE imports (
    position  INTEGER PRIMARY KEY,
    sha256    TEXT    NOT NULL UNIQUE CHECK (length(sha256) = 64),
    day       TEXT    NOT NULL,
    file_name TEXT    NOT NULL
) STRICT;

-- What is written stays written.

CREATE TRIGGER entries_join_no_closed_visit BEFORE INSERT ON entries
WHEN (SELECT state FROM visits WHERE id = NEW.visit) = 'closed'
BEGIN SELECT RAISE(ABORT, 'The visit is closed; what is wrong in it is mended by a correction.'); END;

CREATE TRIGGER entries_are_not_changed BEFORE UPDATE ON entries
BEGIN SELECT RAISE(ABORT, 'An entry is never changed; strike it by a new one.'); END;

CREATE TRIGGER entries_are_not_deleted BEFORE DELETE ON entries
BEGIN SELECT RAISE(ABORT, 'An entry is never deleted; strike it by a new one.'); END;

CREATE TRIGGER visits_only_close BEFORE UPDATE ON visits
WHEN NOT (OLD.state = 'open' AND NEW.state = 'closed' AND OLD.position = NEW.position AND OLD.id = NEW.id AND OLD.site = NEW.site
    AND OLD.local_date = NEW.local_date AND OLD.minute IS NEW.minute AND OLD.time_zone = NEW.time_zone AND OLD.begun = NEW.begun
    AND OLD.device = NEW.device AND OLD.counter = NEW.counter)
BEGIN SELECT RAISE(ABORT, 'A visit can be closed once and is never changed otherwise.'); END;

CREATE TRIGGER visits_are_not_deleted BEFORE DELETE ON visits
BEGIN SELECT RAISE(ABORT, 'A visit is never deleted.'); END;

CREATE TRIGGER visit_people_join_no_closed_visit BEFORE INSERT ON visit_people
WHEN (SELECT state FROM visits WHERE id = NEW.visit) = 'closed'
BEGIN SELECT RAISE(ABORT, 'The visit is closed; nobody can join it.'); END;

CREATE TRIGGER visit_people_are_not_changed BEFORE UPDATE ON visit_people
BEGIN SELECT RAISE(ABORT, 'Who was at work on a visit is never changed.'); END;

CREATE TRIGGER visit_people_are_not_deleted BEFORE DELETE ON visit_people
BEGIN SELECT RAISE(ABORT, 'Who was at work on a visit is never changed.'); END;

CREATE TRIGGER cautions_seen_join_no_closed_visit BEFORE INSERT ON cautions_seen
WHEN (SELECT state FROM visits WHERE id = NEW.visit) = 'closed'
BEGIN SELECT RAISE(ABORT, 'The visit is closed; no caution can be acknowledged in it.'); END;

CREATE TRIGGER cautions_seen_are_not_changed BEFORE UPDATE ON cautions_seen
BEGIN SELECT RAISE(ABORT, 'An acknowledged caution is never changed.'); END;

CREATE TRIGGER cautions_seen_are_not_deleted BEFORE DELETE ON cautions_seen
BEGIN SELECT RAISE(ABORT, 'An acknowledged caution is never changed.'); END;

CREATE TRIGGER closings_are_not_changed BEFORE UPDATE ON closings
BEGIN SELECT RAISE(ABORT, 'A closing is never changed.'); END;

CREATE TRIGGER closings_are_not_deleted BEFORE DELETE ON closings
BEGIN SELECT RAISE(ABORT, 'A closing is never changed.'); END;

CREATE TRIGGER closed_records_are_not_changed BEFORE UPDATE ON closed_records
BEGIN SELECT RAISE(ABORT, 'A closed record is never changed.'); END;

CREATE TRIGGER closed_records_are_not_deleted BEFORE DELETE ON closed_records
BEGIN SELECT RAISE(ABORT, 'A closed record is never changed.'); END;

CREATE TRIGGER countersignatures_are_not_changed BEFORE UPDATE ON countersignatures
BEGIN SELECT RAISE(ABORT, 'A signature is never changed.'); END;

CREATE TRIGGER countersignatures_are_not_deleted BEFORE DELETE ON countersignatures
BEGIN SELECT RAISE(ABORT, 'A signature is never changed.'); END;

CREATE TRIGGER hand_overs_are_not_changed BEFORE UPDATE ON hand_overs
BEGIN SELECT RAISE(ABORT, 'A hand-over is never changed.'); END;

CREATE TRIGGER hand_overs_are_not_deleted BEFORE DELETE ON hand_overs
BEGIN SELECT RAISE(ABORT, 'A hand-over is never changed.'); END;
