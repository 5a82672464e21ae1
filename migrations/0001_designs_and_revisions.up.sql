-- The layout of a data file: designs that change, revisions that never do.
--
-- Times are microseconds since 1970 in UTC. Drafts, designs, points and
-- findings are JSON that only the program reads: BLOBs here, byte for byte.

-- "Loss" in ASCII: marks the file as ours at a fixed place of its header.
PRAGMA application_id = 1282372467;

-- Facts about the data file itself, such as whether it was given its samples.
CREATE TABLE meta (
    key   TEXT NOT NULL PRIMARY KEY,
    value TEXT NOT NULL
) STRICT, WITHOUT ROWID;

-- AUTOINCREMENT, so the id of a purged design never names another one.
CREATE TABLE designs (
    id         INTEGER PRIMARY KEY AUTOINCREMENT,
    name       TEXT    NOT NULL,
    sample     INTEGER NOT NULL DEFAULT 0 CHECK (sample IN (0, 1)),
    created_at INTEGER NOT NULL,
    updated_at INTEGER NOT NULL,
    deleted_at INTEGER,                      -- in the bin since; NULL: not in it
    version    INTEGER NOT NULL DEFAULT 1 CHECK (version >= 1),
    draft      BLOB    NOT NULL,             -- the entries as typed
    complete   BLOB                          -- the last complete design; NULL: never was
) STRICT;

CREATE INDEX designs_by_change ON designs (updated_at DESC, id DESC);

-- Small columns first, so a list of heads reads no more than it shows.
CREATE TABLE revisions (
    id         INTEGER PRIMARY KEY CHECK (id >= 1),
    design     INTEGER NOT NULL REFERENCES designs (id) ON UPDATE RESTRICT ON DELETE RESTRICT,
    number     INTEGER NOT NULL CHECK (number >= 1),
    created_at INTEGER NOT NULL,
    model      TEXT    NOT NULL,
    hash       TEXT    NOT NULL CHECK (length(hash) = 64),
    note       TEXT    NOT NULL,
    complete   BLOB    NOT NULL,             -- the design it was saved of
    draft      BLOB    NOT NULL,             -- its entries as typed
    points     BLOB    NOT NULL,             -- the results, as they were then
    findings   BLOB    NOT NULL,
    UNIQUE (design, number)
) STRICT;

-- Numbers run 1, 2, 3, … in a design. The check comes before SQLite settles a
-- conflict, so it also stops INSERT OR REPLACE from overwriting a revision, by
-- either key, on a connection that doesn't have recursive_triggers on. NEW.id
-- is -1 here unless the statement names one.
CREATE TRIGGER revisions_in_order BEFORE INSERT ON revisions
WHEN NEW.number <> (SELECT coalesce(max(number), 0) + 1 FROM revisions WHERE design = NEW.design)
    OR EXISTS (SELECT 1 FROM revisions WHERE id = NEW.id)
BEGIN
    SELECT RAISE(ABORT, 'a revision takes the next number and is never replaced');
END;

CREATE TRIGGER revisions_never_change BEFORE UPDATE ON revisions
BEGIN
    SELECT RAISE(ABORT, 'a revision never changes');
END;

-- A design may go for good, and its revisions with it, after 30 days in the bin.
CREATE TRIGGER revisions_outlive_the_bin BEFORE DELETE ON revisions
WHEN NOT EXISTS (
    SELECT 1 FROM designs
    WHERE id = OLD.design AND deleted_at <= (unixepoch() - 30 * 86400) * 1000000
)
BEGIN
    SELECT RAISE(ABORT, 'a revision goes only with its design, 30 days after that went into the bin');
END;
