-- Belt tables of the user: the table itself is a blob, so that assessments hold on to it when the row is deleted.
CREATE TABLE beltTables (
  id TEXT PRIMARY KEY, studyId TEXT REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
