-- What a draft was before its edits, and what it was before they were undone.
--
-- Each row is a whole state of the draft. The newest row behind the draft is
-- where undo leads, the newest ahead of it is where redo leads. An edit adds a
-- row behind and drops all that are ahead; the oldest are dropped in time.
CREATE TABLE steps (
    id       INTEGER PRIMARY KEY CHECK (id >= 1),
    design   INTEGER NOT NULL REFERENCES designs (id) ON UPDATE RESTRICT ON DELETE RESTRICT,
    ahead    INTEGER NOT NULL CHECK (ahead IN (0, 1)),
    run      TEXT    NOT NULL,             -- what was being typed when it was left; '': a step of its own
    name     TEXT    NOT NULL,             -- of the design
    draft    BLOB    NOT NULL,
    complete BLOB
) STRICT;

CREATE INDEX steps_by_design ON steps (design, ahead, id);
