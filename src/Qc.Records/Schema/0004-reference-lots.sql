-- A product's reference lots: proposed by the method owner, in force once a second person released them with a signature.

CREATE TABLE qc.product_references (
  id text PRIMARY KEY,
  product_id text NOT NULL REFERENCES qc.products,
  number integer NOT NULL CHECK (number > 0),
  lot_id text NOT NULL REFERENCES qc.lots,
  computation_id text NOT NULL REFERENCES qc.computations,
  constants_json text NOT NULL,
  proposed_at timestamptz NOT NULL,
  proposed_by text NOT NULL,
  UNIQUE (product_id, number)
);
GRANT SELECT, INSERT ON qc.product_references TO qc_app;
GRANT SELECT ON qc.product_references TO qc_reader;
CALL qc.guard('qc.product_references');

CREATE TABLE qc.product_reference_events (
  id text PRIMARY KEY,
  reference_id text NOT NULL REFERENCES qc.product_references,
  kind text NOT NULL CHECK (kind IN ('released', 'withdrawn')),
  at timestamptz NOT NULL,
  by text NOT NULL,
  signature_id text NOT NULL REFERENCES qc.signatures,
  UNIQUE (reference_id, kind)
);
GRANT SELECT, INSERT ON qc.product_reference_events TO qc_app;
GRANT SELECT ON qc.product_reference_events TO qc_reader;
CALL qc.guard('qc.product_reference_events');
