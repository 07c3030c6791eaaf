CREATE TABLE budget (
  id INTEGER PRIMARY KEY,
  product_id INTEGER NOT NULL REFERENCES product (id) ON DELETE CASCADE,
  run_id INTEGER NOT NULL,
  run_ended_at_ms INTEGER NOT NULL,
  name TEXT NOT NULL,
  note TEXT NOT NULL DEFAULT '',
  in_use INTEGER NOT NULL DEFAULT 0 CHECK (in_use IN (0, 1)),
  order_name TEXT NOT NULL CHECK (order_name IN ('as-delivered', 'steepest', 'smallest', 'by-hand')),
  cut INTEGER NOT NULL CHECK (cut >= 0),
  assumptions_json TEXT NOT NULL CHECK (json_valid(assumptions_json)),
  figures_json TEXT NOT NULL CHECK (json_valid(figures_json)),
  created_at_ms INTEGER NOT NULL,
  deleted_token TEXT
) STRICT;

CREATE TABLE netlist (
  id INTEGER PRIMARY KEY,
  product_id INTEGER NOT NULL REFERENCES product (id) ON DELETE CASCADE,
  name TEXT NOT NULL,
  note TEXT NOT NULL DEFAULT '',
  sha256 TEXT NOT NULL,
  account_json TEXT NOT NULL CHECK (json_valid(account_json)),
  warnings INTEGER NOT NULL CHECK (warnings >= 0),
  created_at_ms INTEGER NOT NULL,
  deleted_token TEXT
) STRICT;

CREATE TABLE packed (
  id INTEGER PRIMARY KEY,
  pattern_set_id INTEGER REFERENCES pattern_set (id) ON DELETE CASCADE,
  run_id INTEGER REFERENCES run (id) ON DELETE CASCADE,
  kind TEXT NOT NULL CHECK (kind IN ('patterns', 'segment')),
  part INTEGER NOT NULL CHECK (part >= 0),
  bytes BLOB NOT NULL,
  CHECK ((pattern_set_id IS NULL) <> (run_id IS NULL))
) STRICT;

CREATE TABLE pattern_set (
  id INTEGER PRIMARY KEY,
  product_id INTEGER NOT NULL REFERENCES product (id) ON DELETE CASCADE,
  netlist_id INTEGER NOT NULL REFERENCES netlist (id) ON DELETE CASCADE,
  name TEXT NOT NULL,
  note TEXT NOT NULL DEFAULT '',
  sha256 TEXT NOT NULL,
  account_json TEXT NOT NULL CHECK (json_valid(account_json)),
  warnings INTEGER NOT NULL CHECK (warnings >= 0),
  created_at_ms INTEGER NOT NULL,
  deleted_token TEXT
) STRICT;

CREATE TABLE product (
  id INTEGER PRIMARY KEY,
  name TEXT NOT NULL,
  note TEXT NOT NULL DEFAULT '',
  values_json TEXT NOT NULL CHECK (json_valid(values_json)),
  limits_json TEXT NOT NULL CHECK (json_valid(limits_json)),
  tester_id INTEGER REFERENCES tester (id) ON DELETE SET NULL,
  created_at_ms INTEGER NOT NULL,
  deleted_token TEXT
) STRICT;

CREATE TABLE project (
  id INTEGER PRIMARY KEY CHECK (id = 1),
  name TEXT NOT NULL,
  created_at_ms INTEGER NOT NULL
) STRICT;

CREATE TABLE run (
  id INTEGER PRIMARY KEY,
  product_id INTEGER NOT NULL REFERENCES product (id) ON DELETE CASCADE,
  netlist_id INTEGER NOT NULL REFERENCES netlist (id) ON DELETE CASCADE,
  pattern_set_id INTEGER NOT NULL REFERENCES pattern_set (id) ON DELETE CASCADE,
  number INTEGER NOT NULL CHECK (number >= 1),
  state TEXT NOT NULL CHECK (state IN ('queued', 'running', 'done', 'failed', 'cancelled', 'interrupted')),
  detection_limit INTEGER NOT NULL CHECK (detection_limit >= 0),
  patterns_done INTEGER NOT NULL DEFAULT 0 CHECK (patterns_done >= 0),
  patterns_total INTEGER NOT NULL CHECK (patterns_total >= 0),
  seconds REAL NOT NULL DEFAULT 0,
  segments INTEGER NOT NULL DEFAULT 0 CHECK (segments >= 0),
  figures_json TEXT CHECK (json_valid(figures_json)),
  reason TEXT,
  engine TEXT NOT NULL,
  created_at_ms INTEGER NOT NULL,
  ended_at_ms INTEGER,
  deleted_token TEXT
) STRICT;

CREATE TABLE source (
  id INTEGER PRIMARY KEY,
  netlist_id INTEGER REFERENCES netlist (id) ON DELETE CASCADE,
  pattern_set_id INTEGER REFERENCES pattern_set (id) ON DELETE CASCADE,
  role TEXT NOT NULL CHECK (role IN ('netlist', 'library', 'patterns')),
  name TEXT NOT NULL,
  size_bytes INTEGER NOT NULL CHECK (size_bytes >= 0),
  sha256 TEXT NOT NULL,
  gzip BLOB NOT NULL,
  CHECK ((netlist_id IS NULL) <> (pattern_set_id IS NULL))
) STRICT;

CREATE TABLE tester (
  id INTEGER PRIMARY KEY,
  name TEXT NOT NULL,
  note TEXT NOT NULL DEFAULT '',
  values_json TEXT NOT NULL CHECK (json_valid(values_json)),
  created_at_ms INTEGER NOT NULL,
  deleted_token TEXT
) STRICT;

CREATE UNIQUE INDEX budget_in_use ON budget (product_id) WHERE in_use = 1 AND deleted_token IS NULL;

CREATE UNIQUE INDEX budget_name ON budget (product_id, name) WHERE deleted_token IS NULL;

CREATE UNIQUE INDEX netlist_name ON netlist (product_id, name) WHERE deleted_token IS NULL;

CREATE UNIQUE INDEX packed_pattern_set ON packed (pattern_set_id, kind, part) WHERE pattern_set_id IS NOT NULL;

CREATE UNIQUE INDEX packed_run ON packed (run_id, kind, part) WHERE run_id IS NOT NULL;

CREATE UNIQUE INDEX pattern_set_name ON pattern_set (product_id, name) WHERE deleted_token IS NULL;

CREATE INDEX pattern_set_netlist ON pattern_set (netlist_id);

CREATE UNIQUE INDEX product_name ON product (name) WHERE deleted_token IS NULL;

CREATE INDEX product_tester ON product (tester_id);

CREATE INDEX run_netlist ON run (netlist_id);

CREATE UNIQUE INDEX run_number ON run (product_id, number);

CREATE INDEX run_pattern_set ON run (pattern_set_id);

CREATE INDEX source_netlist ON source (netlist_id);

CREATE INDEX source_pattern_set ON source (pattern_set_id);

CREATE UNIQUE INDEX tester_name ON tester (name) WHERE deleted_token IS NULL;
