-- What no program may forget is asked for by the database: a fact has its audit entry in the same transaction, the audit log
-- and each year's certificates are numbered without gaps, and refusals hold in every session, replication sessions included.

CREATE TABLE qc.certificate_events (
  id text PRIMARY KEY,
  certificate_number text NOT NULL REFERENCES qc.certificates,
  kind text NOT NULL CHECK (kind IN ('withdrawn')),
  reason text NOT NULL,
  at timestamptz NOT NULL,
  by text NOT NULL,
  signature_id text NOT NULL REFERENCES qc.signatures,
  UNIQUE (certificate_number, kind)
);
GRANT SELECT, INSERT ON qc.certificate_events TO qc_app;
GRANT SELECT ON qc.certificate_events TO qc_reader;

-- Each entry carries the transaction that wrote it; the database sets it, whatever the writer says.
ALTER TABLE qc.audit_rows ADD COLUMN transaction_id xid8 NOT NULL DEFAULT '0';

CREATE FUNCTION qc.stamp_transaction() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  NEW.transaction_id := pg_current_xact_id();
  RETURN NEW;
END $$;

-- Writers hold a lock from their entry to their commit, so the newest entry at the commit of a fact is that of its own
-- transaction, or the fact has none.
CREATE FUNCTION qc.require_audit() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF (SELECT transaction_id FROM qc.audit_rows ORDER BY index DESC LIMIT 1) IS DISTINCT FROM pg_current_xact_id() THEN
    RAISE EXCEPTION 'a row of qc.% has no audit entry in its transaction', TG_TABLE_NAME USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NULL;
END $$;

CREATE FUNCTION qc.refuse_gap_in_audit_log() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.index > 0 AND NOT EXISTS (SELECT FROM qc.audit_rows WHERE index = NEW.index - 1) THEN
    RAISE EXCEPTION 'audit entry % has no predecessor', NEW.index USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NULL;
END $$;

CREATE FUNCTION qc.refuse_gap_in_certificates() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.serial > 1 AND NOT EXISTS (SELECT FROM qc.certificates WHERE year = NEW.year AND serial = NEW.serial - 1) THEN
    RAISE EXCEPTION 'certificate % of % has no predecessor', NEW.serial, NEW.year USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NULL;
END $$;

-- Every migration that adds a record table calls this for it.
CREATE PROCEDURE qc.guard(record_table regclass, needs_audit boolean DEFAULT true) LANGUAGE plpgsql AS $$
BEGIN
  EXECUTE format('CREATE OR REPLACE TRIGGER refuse_change BEFORE UPDATE OR DELETE ON %s FOR EACH ROW EXECUTE FUNCTION qc.refuse_change()', record_table);
  EXECUTE format('CREATE OR REPLACE TRIGGER refuse_truncate BEFORE TRUNCATE ON %s FOR EACH STATEMENT EXECUTE FUNCTION qc.refuse_change()', record_table);
  EXECUTE format('ALTER TABLE %s ENABLE ALWAYS TRIGGER refuse_change', record_table);
  EXECUTE format('ALTER TABLE %s ENABLE ALWAYS TRIGGER refuse_truncate', record_table);
  IF needs_audit THEN
    EXECUTE format('CREATE CONSTRAINT TRIGGER require_audit AFTER INSERT ON %s DEFERRABLE INITIALLY DEFERRED FOR EACH ROW EXECUTE FUNCTION qc.require_audit()', record_table);
    EXECUTE format('ALTER TABLE %s ENABLE ALWAYS TRIGGER require_audit', record_table);
  END IF;
END $$;
REVOKE EXECUTE ON PROCEDURE qc.guard FROM PUBLIC;

CREATE TRIGGER stamp_transaction BEFORE INSERT ON qc.audit_rows FOR EACH ROW EXECUTE FUNCTION qc.stamp_transaction();
CREATE TRIGGER refuse_gap AFTER INSERT ON qc.audit_rows FOR EACH ROW EXECUTE FUNCTION qc.refuse_gap_in_audit_log();
CREATE TRIGGER refuse_gap AFTER INSERT ON qc.certificates FOR EACH ROW EXECUTE FUNCTION qc.refuse_gap_in_certificates();
ALTER TABLE qc.audit_rows ENABLE ALWAYS TRIGGER stamp_transaction;
ALTER TABLE qc.audit_rows ENABLE ALWAYS TRIGGER refuse_gap;
ALTER TABLE qc.certificates ENABLE ALWAYS TRIGGER refuse_gap;

-- The log, its tree and its signed heads are the evidence itself and need no entry.
DO $$
DECLARE record_table text;
BEGIN
  FOR record_table IN SELECT tablename FROM pg_tables WHERE schemaname = 'qc' LOOP
    CALL qc.guard(format('qc.%I', record_table)::regclass, record_table NOT IN ('audit_rows', 'merkle_nodes', 'tree_heads'));
  END LOOP;
END $$;

-- Begins an append: waits for the other writers, then gives size and time, and the roots of the complete subtrees that make
-- up the log, largest level last. Each statement of the function sees what was committed before it began.
CREATE FUNCTION qc.begin_audit(OUT size bigint, OUT at timestamptz, OUT levels integer[], OUT hashes bytea[]) LANGUAGE plpgsql AS $$
BEGIN
  PERFORM pg_advisory_xact_lock(x'51434155'::bigint); -- "QCAU"
  SELECT coalesce(max(r.index) + 1, 0) INTO begin_audit.size FROM qc.audit_rows r;
  begin_audit.at := date_trunc('microseconds', clock_timestamp());
  SELECT coalesce(array_agg(n.level ORDER BY n.level), '{}'), coalesce(array_agg(n.hash ORDER BY n.level), '{}')
    INTO begin_audit.levels, begin_audit.hashes
    FROM generate_series(0, 61) l JOIN qc.merkle_nodes n ON n.level = l AND n.index = (begin_audit.size >> l) - 1
    WHERE (begin_audit.size >> l) & 1 = 1;
END $$;
