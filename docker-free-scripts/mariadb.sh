#!/bin/sh
# The private MariaDB apart from npm start: mariadb.sh start | stop | status. A running one is used by npm start and left running.
set -eu
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
need_node
need_data_folder
need_packages
need_mariadb
exec node --conditions=source --import tsx docker-free-scripts/supervisor/mariadb-command.ts "$@"
