#!/bin/sh
# Roles of the database: the owner migrates, the application may insert and read records, the reader only reads.
set -eu
app_password=$(cat /run/secrets/postgres-app)
psql -v ON_ERROR_STOP=1 -U qc_owner -d qc -v app_password="$app_password" <<'SQL'
CREATE ROLE qc_app LOGIN PASSWORD :'app_password';
CREATE ROLE qc_reader NOLOGIN;
SQL
