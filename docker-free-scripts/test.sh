#!/bin/sh
# npm test: its own set-up, then every test. Arguments name projects: npm test -- unit integration
set -eu
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
need_node
need_packages
need_debian mariadbd mariadb-server-core mariadb-client-core
need_debian chromium chromium
need_debian pdftotext poppler-utils
need_debian hledger hledger
exec node --conditions=source --import tsx docker-free-scripts/supervisor/run-tests.ts "$@"
