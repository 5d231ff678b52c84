#!/bin/sh
# Makes connection strings from mounted secrets and starts the service.
set -eu
host=${QC_DATABASE_HOST:?name the database host}
export ConnectionStrings__Owner="Host=$host;Database=qc;Username=qc_owner;Password=$(cat /run/secrets/postgres-owner)"
export ConnectionStrings__Application="Host=$host;Database=qc;Username=qc_app;Password=$(cat /run/secrets/postgres-app)"
exec dotnet /app/Qc.Service.dll --data /data --urls http://0.0.0.0:8080
