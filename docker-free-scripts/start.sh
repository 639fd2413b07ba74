#!/bin/sh
# npm start: everything a fresh machine needs, then the supervisor. Safe to repeat; Ctrl-C ends all of it.
set -eu
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
need_node
need_data_folder
# The kernel lets this lock go with the process that holds it, however it ends; the supervisor takes it over by exec.
exec 9>>.data/start.lock
if ! flock -n 9; then
  address=$(cat .data/address 2>/dev/null || true)
  fail "Tenderlight is running from this folder already${address:+: $address}
Stop it with Ctrl-C in its own window, then start again."
fi
rm -f .data/address
need_packages
if [ -z "${DATABASE_URL:-}" ] && ! grep -qs '^DATABASE_URL=.' .env; then
  need_mariadb
fi
exec node --conditions=source --import tsx docker-free-scripts/supervisor/start.ts
