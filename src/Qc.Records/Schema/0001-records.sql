-- Records are append-only: a new state is a new row. The application may read and insert; triggers refuse update, delete
-- and truncate to everybody, the owner included.

CREATE SCHEMA qc;
CREATE SCHEMA people;
CREATE SCHEMA queue;

CREATE FUNCTION qc.refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION 'qc.% is append-only: % is refused', TG_TABLE_NAME, TG_OP USING ERRCODE = 'insufficient_privilege';
END $$;

CREATE TABLE qc.products (
  id text PRIMARY KEY,
  code text NOT NULL UNIQUE,
  name text NOT NULL,
  smiles text NOT NULL,
  inchi text NOT NULL,
  inchi_key text NOT NULL,
  formula text NOT NULL,
  molar_mass_gram_per_mol double precision NOT NULL,
  molar_mass_standard_uncertainty_gram_per_mol double precision NOT NULL,
  mol_block text NOT NULL,
  solvent text NOT NULL,
  nucleus text NOT NULL,
  expectation_json text NOT NULL,
  created_at timestamptz NOT NULL,
  created_by text NOT NULL
);

CREATE TABLE qc.specification_versions (
  id text PRIMARY KEY,
  product_id text NOT NULL REFERENCES qc.products,
  version integer NOT NULL CHECK (version > 0),
  posted_json text NOT NULL,
  criteria_json text NOT NULL,
  rivals_json text NOT NULL,
  drafted_at timestamptz NOT NULL,
  drafted_by text NOT NULL,
  UNIQUE (product_id, version)
);

CREATE TABLE qc.signatures (
  id text PRIMARY KEY,
  subject_type text NOT NULL,
  subject_id text NOT NULL,
  content_sha256 text NOT NULL,
  statement_json text NOT NULL,
  meaning text NOT NULL,
  person_user text NOT NULL,
  printed_name text NOT NULL,
  at timestamptz NOT NULL
);

CREATE TABLE qc.specification_events (
  id text PRIMARY KEY,
  specification_id text NOT NULL REFERENCES qc.specification_versions,
  kind text NOT NULL CHECK (kind IN ('approved', 'retired')),
  effective_from timestamptz NOT NULL,
  at timestamptz NOT NULL,
  by text NOT NULL,
  signature_id text REFERENCES qc.signatures,
  UNIQUE (specification_id, kind)
);

CREATE TABLE qc.lots (
  id text PRIMARY KEY,
  product_id text NOT NULL REFERENCES qc.products,
  specification_id text NOT NULL REFERENCES qc.specification_versions,
  lot_number text NOT NULL,
  sequence integer NOT NULL CHECK (sequence > 0),
  sampled_at timestamptz,
  sample_json text,
  instrument text,
  callback_url text,
  submitted_at timestamptz NOT NULL,
  submitted_by text NOT NULL,
  UNIQUE (product_id, lot_number, sequence)
);
CREATE INDEX lots_newest ON qc.lots (submitted_at DESC, id DESC);

CREATE TABLE qc.lot_spectra (
  lot_id text NOT NULL REFERENCES qc.lots,
  number integer NOT NULL CHECK (number > 0),
  name text NOT NULL,
  format text NOT NULL,
  sha256 text NOT NULL,
  bytes bytea NOT NULL,
  PRIMARY KEY (lot_id, number)
);

CREATE TABLE qc.lot_events (
  id bigint GENERATED ALWAYS AS IDENTITY PRIMARY KEY,
  lot_id text NOT NULL REFERENCES qc.lots,
  state text NOT NULL CHECK (state IN
    ('queued', 'checking', 'checked', 'unreadable', 'reviewed', 'released', 'rejected', 'remeasure')),
  at timestamptz NOT NULL,
  by text NOT NULL
);
CREATE INDEX lot_events_of_lot ON qc.lot_events (lot_id, id DESC);

CREATE TABLE qc.computations (
  id text PRIMARY KEY,
  lot_id text NOT NULL REFERENCES qc.lots,
  number integer NOT NULL CHECK (number > 0),
  engine_version text NOT NULL,
  verdict text CHECK (verdict IN ('pass', 'flag')),
  unreadable boolean NOT NULL,
  unsuitable boolean NOT NULL,
  summary text NOT NULL,
  report_json text NOT NULL,
  report_sha256 text NOT NULL,
  request_sha256 text NOT NULL,
  duration_milliseconds double precision NOT NULL,
  at timestamptz NOT NULL,
  UNIQUE (lot_id, number)
);

CREATE TABLE qc.traces (
  computation_id text NOT NULL REFERENCES qc.computations,
  spectrum_number integer NOT NULL,
  first_ppm double precision NOT NULL,
  ppm_per_point double precision NOT NULL,
  count integer NOT NULL,
  measured bytea NOT NULL,
  modelled bytea NOT NULL,
  PRIMARY KEY (computation_id, spectrum_number)
);

CREATE TABLE qc.reviews (
  id text PRIMARY KEY,
  lot_id text NOT NULL REFERENCES qc.lots,
  number integer NOT NULL CHECK (number > 0),
  computation_id text NOT NULL REFERENCES qc.computations,
  decision text NOT NULL CHECK (decision IN ('release', 'reject', 'remeasure')),
  reason text NOT NULL,
  findings_json text NOT NULL,
  at timestamptz NOT NULL,
  by text NOT NULL,
  signature_id text NOT NULL REFERENCES qc.signatures,
  UNIQUE (lot_id, number)
);

CREATE TABLE qc.certificates (
  number text PRIMARY KEY,
  year integer NOT NULL,
  serial integer NOT NULL CHECK (serial > 0),
  lot_id text NOT NULL REFERENCES qc.lots,
  version integer NOT NULL CHECK (version > 0),
  supersedes_number text REFERENCES qc.certificates,
  json text NOT NULL,
  pdf bytea NOT NULL,
  pdf_sha256 text NOT NULL,
  issued_at timestamptz NOT NULL,
  UNIQUE (year, serial),
  UNIQUE (lot_id, version)
);

CREATE TABLE qc.idempotency_records (
  principal text NOT NULL,
  key text NOT NULL,
  body_sha256 text NOT NULL,
  lot_id text NOT NULL REFERENCES qc.lots,
  at timestamptz NOT NULL,
  PRIMARY KEY (principal, key)
);

CREATE TABLE qc.lims_keys (
  id text PRIMARY KEY,
  name text NOT NULL,
  secret_sha256 text NOT NULL,
  scopes text NOT NULL,
  expires_at timestamptz,
  created_at timestamptz NOT NULL,
  created_by text NOT NULL
);

CREATE TABLE qc.lims_key_revocations (
  key_id text PRIMARY KEY REFERENCES qc.lims_keys,
  at timestamptz NOT NULL,
  by text NOT NULL
);

CREATE TABLE qc.audit_rows (
  index bigint PRIMARY KEY CHECK (index >= 0),
  at timestamptz NOT NULL,
  actor text NOT NULL,
  action text NOT NULL,
  subject_type text NOT NULL,
  subject_id text NOT NULL,
  canonical_json text NOT NULL,
  leaf_hash bytea NOT NULL CHECK (length(leaf_hash) = 32)
);
CREATE INDEX audit_rows_of_subject ON qc.audit_rows (subject_type, subject_id, index);

CREATE TABLE qc.merkle_nodes (
  level integer NOT NULL CHECK (level >= 0),
  index bigint NOT NULL CHECK (index >= 0),
  hash bytea NOT NULL CHECK (length(hash) = 32),
  PRIMARY KEY (level, index)
);

CREATE TABLE qc.tree_heads (
  size bigint NOT NULL,
  at timestamptz NOT NULL,
  root_hash bytea NOT NULL,
  signed_text text NOT NULL,
  signature text NOT NULL,
  PRIMARY KEY (size, at)
);

-- Accounts are not records: passwords change and lockouts count. Every change of them is an audit entry.
CREATE TABLE people.people (
  id text PRIMARY KEY,
  user_name varchar(256),
  normalized_user_name varchar(256),
  email varchar(256),
  normalized_email varchar(256),
  email_confirmed boolean NOT NULL,
  password_hash text,
  security_stamp text,
  concurrency_stamp text,
  phone_number text,
  phone_number_confirmed boolean NOT NULL,
  two_factor_enabled boolean NOT NULL,
  lockout_end timestamptz,
  lockout_enabled boolean NOT NULL,
  access_failed_count integer NOT NULL,
  printed_name text NOT NULL,
  is_active boolean NOT NULL,
  must_change_password boolean NOT NULL
);
CREATE UNIQUE INDEX people_by_name ON people.people (normalized_user_name);

CREATE TABLE people.roles (
  id text PRIMARY KEY,
  name varchar(256),
  normalized_name varchar(256),
  concurrency_stamp text
);
CREATE UNIQUE INDEX roles_by_name ON people.roles (normalized_name);

CREATE TABLE people.person_roles (
  user_id text NOT NULL REFERENCES people.people ON DELETE CASCADE,
  role_id text NOT NULL REFERENCES people.roles ON DELETE CASCADE,
  PRIMARY KEY (user_id, role_id)
);

CREATE TABLE people.person_claims (
  id integer GENERATED BY DEFAULT AS IDENTITY PRIMARY KEY,
  user_id text NOT NULL REFERENCES people.people ON DELETE CASCADE,
  claim_type text,
  claim_value text
);

CREATE TABLE people.role_claims (
  id integer GENERATED BY DEFAULT AS IDENTITY PRIMARY KEY,
  role_id text NOT NULL REFERENCES people.roles ON DELETE CASCADE,
  claim_type text,
  claim_value text
);

CREATE TABLE people.person_logins (
  login_provider text NOT NULL,
  provider_key text NOT NULL,
  provider_display_name text,
  user_id text NOT NULL REFERENCES people.people ON DELETE CASCADE,
  PRIMARY KEY (login_provider, provider_key)
);

CREATE TABLE people.person_tokens (
  user_id text NOT NULL REFERENCES people.people ON DELETE CASCADE,
  login_provider text NOT NULL,
  name text NOT NULL,
  value text,
  PRIMARY KEY (user_id, login_provider, name)
);

DO $$
DECLARE record_table text;
BEGIN
  FOR record_table IN SELECT tablename FROM pg_tables WHERE schemaname = 'qc' LOOP
    EXECUTE format('CREATE TRIGGER refuse_change BEFORE UPDATE OR DELETE ON qc.%I FOR EACH ROW EXECUTE FUNCTION qc.refuse_change()', record_table);
    EXECUTE format('CREATE TRIGGER refuse_truncate BEFORE TRUNCATE ON qc.%I FOR EACH STATEMENT EXECUTE FUNCTION qc.refuse_change()', record_table);
  END LOOP;
END $$;

-- Roles belong to the server; the private server makes them, in production the administrator does (deploy/).
GRANT USAGE ON SCHEMA qc, people TO qc_app;
GRANT SELECT, INSERT ON ALL TABLES IN SCHEMA qc TO qc_app;
GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA people TO qc_app;
GRANT USAGE ON ALL SEQUENCES IN SCHEMA people TO qc_app;
GRANT USAGE, CREATE ON SCHEMA queue TO qc_app;
GRANT USAGE ON SCHEMA qc TO qc_reader;
GRANT SELECT ON ALL TABLES IN SCHEMA qc TO qc_reader;
