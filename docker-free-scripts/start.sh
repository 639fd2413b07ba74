#!/bin/sh
# npm start: everything a fresh machine needs, then the supervisor. Safe to repeat; Ctrl-C ends all of it.
set -eu
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
need_node
need_packages
if [ -z "${DATABASE_URL:-}" ]; then
  need_debian mariadbd mariadb-server-core mariadb-client-core
fi
exec node --conditions=source --import tsx docker-free-scripts/supervisor/start.ts
