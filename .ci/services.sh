#!/bin/bash
# Installs what is missing of PostgreSQL, Redis and Chromium (Debian), starts what does not answer, and makes the role
# that the tests use. Fails if one of the three is not there in the end.
set -euo pipefail
PATH="$PATH:/usr/local/sbin:/usr/sbin:/sbin"

as_root() { if [ "$(id -u)" = 0 ]; then "$@"; else sudo -n "$@"; fi; }
as_postgres() { if [ "$(id -u)" = 0 ]; then runuser -u postgres -- "$@"; else sudo -n -u postgres "$@"; fi; }

missing=()
command -v pg_ctlcluster >/dev/null || missing+=(postgresql)
command -v redis-server >/dev/null || missing+=(redis-server)
command -v chromium >/dev/null || missing+=(chromium)
if [ ${#missing[@]} -gt 0 ]; then
    echo "Installing ${missing[*]}"
    export DEBIAN_FRONTEND=noninteractive LC_ALL=C.UTF-8  # the locale decides the encoding of a new cluster
    as_root apt-get update -qq
    as_root env DEBIAN_FRONTEND="$DEBIAN_FRONTEND" LC_ALL="$LC_ALL" apt-get install -y -qq --no-install-recommends "${missing[@]}"
fi

if [ -z "$(pg_lsclusters --no-header)" ]; then
    as_root pg_createcluster --encoding UTF8 "$(ls /usr/lib/postgresql | sort -V | tail -n 1)" main
fi
read -r version cluster port status _ < <(pg_lsclusters --no-header)
if [ "$status" != online ]; then
    echo "Starting PostgreSQL $version"
    as_root pg_ctlcluster --skip-systemctl-redirect "$version" "$cluster" start
fi
[ "$port" = 5432 ] || { echo "PostgreSQL listens at port $port; the tests expect 5432" >&2; exit 1; }
cd /  # a folder that the user postgres may read
as_postgres psql -q -v ON_ERROR_STOP=1 -d postgres <<'SQL'
SELECT 'CREATE ROLE gramledger' WHERE NOT EXISTS (SELECT FROM pg_roles WHERE rolname = 'gramledger') \gexec
ALTER ROLE gramledger LOGIN CREATEDB PASSWORD 'gramledger';
-- tests kill our processes, never the server: a commit need not wait for the disk
ALTER ROLE gramledger SET synchronous_commit = off;
SQL
PGPASSWORD=gramledger psql -q -h 127.0.0.1 -U gramledger -d postgres -Atc "SHOW server_encoding" | grep -qx UTF8

if [ "$(redis-cli ping 2>/dev/null)" != PONG ]; then
    echo "Starting Redis"
    redis-server --daemonize yes --save "" --appendonly no >/dev/null
    for _ in $(seq 50); do redis-cli ping >/dev/null 2>&1 && break; sleep 0.1; done
fi
[ "$(redis-cli ping)" = PONG ]

chromium --version
