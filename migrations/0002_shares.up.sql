-- Links that open one revision to whoever has them.
--
-- Of a link's token only the SHA-256 is kept: who reads this file learns which
-- links there are, and can open none of them.
CREATE TABLE shares (
    id         INTEGER PRIMARY KEY AUTOINCREMENT, -- so an id never names another link
    revision   INTEGER NOT NULL REFERENCES revisions (id) ON UPDATE RESTRICT ON DELETE RESTRICT,
    token_hash BLOB    NOT NULL UNIQUE CHECK (length(token_hash) = 32),
    note       TEXT    NOT NULL,             -- whom it is for
    created_at INTEGER NOT NULL,
    revoked_at INTEGER                       -- opens nothing since; NULL: opens its revision
) STRICT;

CREATE INDEX shares_by_revision ON shares (revision, id);

-- A link can only be revoked: it never comes to open another revision, and once
-- revoked it never opens anything again.
CREATE TRIGGER shares_are_only_revoked BEFORE UPDATE ON shares
WHEN OLD.revoked_at IS NOT NULL OR NEW.revoked_at IS NULL
    OR NEW.id <> OLD.id OR NEW.revision <> OLD.revision OR NEW.token_hash <> OLD.token_hash
    OR NEW.note <> OLD.note OR NEW.created_at <> OLD.created_at
BEGIN
    SELECT RAISE(ABORT, 'a share link can only be revoked, once');
END;
