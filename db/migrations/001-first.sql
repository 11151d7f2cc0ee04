-- Everything a team works on hangs on a study; bodies are JSON documents, large arrays are blobs addressed by sha256.
CREATE TABLE studies (
  id TEXT PRIMARY KEY, name TEXT NOT NULL, body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
CREATE TABLE trajectories (
  id TEXT PRIMARY KEY, studyId TEXT NOT NULL REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, blobSha256 TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
CREATE TABLE cases (
  id TEXT PRIMARY KEY, studyId TEXT NOT NULL REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
CREATE TABLE stacks (
  id TEXT PRIMARY KEY, studyId TEXT NOT NULL REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
CREATE TABLE options (
  id TEXT PRIMARY KEY, studyId TEXT NOT NULL REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
CREATE TABLE parts (
  id TEXT PRIMARY KEY, studyId TEXT NOT NULL REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
CREATE TABLE assessments (
  id TEXT PRIMARY KEY, studyId TEXT NOT NULL REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
CREATE TABLE reports (
  id TEXT PRIMARY KEY, studyId TEXT NOT NULL REFERENCES studies(id) ON DELETE CASCADE, name TEXT NOT NULL,
  body TEXT NOT NULL, createdUtc TEXT NOT NULL, version INTEGER NOT NULL DEFAULT 1
) STRICT;
-- Computed things by the hash of what they were computed from; the value is a blob.
CREATE TABLE artefacts (key TEXT PRIMARY KEY, kind TEXT NOT NULL, blobSha256 TEXT NOT NULL) STRICT;
CREATE TABLE jobs (
  id TEXT PRIMARY KEY, kind TEXT NOT NULL, subjectId TEXT NOT NULL, input TEXT NOT NULL,
  state TEXT NOT NULL CHECK (state IN ('queued', 'running', 'done', 'failed', 'cancelled')),
  progress REAL NOT NULL DEFAULT 0, message TEXT NOT NULL DEFAULT '', result TEXT, problem TEXT, createdUtc TEXT NOT NULL
) STRICT;
CREATE INDEX jobsByState ON jobs(state, createdUtc);
