#!/bin/sh
# Run once by the database's image, on an empty volume: the owner of the records (migrations), the role of the
# site and the worker, which owns nothing, and the database. The same as labrecords/local/postgres.py.
set -eu
psql -v ON_ERROR_STOP=1 -U "$POSTGRES_USER" -d postgres \
     -v owner_password="$DATABASE_OWNER_PASSWORD" -v app_password="$DATABASE_APP_PASSWORD" <<'SQL'
CREATE ROLE lab_owner LOGIN PASSWORD :'owner_password';
CREATE ROLE lab_app LOGIN PASSWORD :'app_password';
CREATE DATABASE lab OWNER lab_owner ENCODING 'UTF8' TEMPLATE template0;
REVOKE ALL ON DATABASE lab FROM PUBLIC;
GRANT CONNECT ON DATABASE lab TO lab_app;
\connect lab
REVOKE CREATE ON SCHEMA public FROM PUBLIC;
ALTER SCHEMA public OWNER TO lab_owner;
SQL
