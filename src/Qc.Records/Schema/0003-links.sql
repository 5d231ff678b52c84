-- A certificate is looked up by its file.
CREATE INDEX certificates_by_file ON qc.certificates (pdf_sha256);
