#!/bin/sh
# npm test: its own set-up, then every test. Arguments name projects, or go on to Vitest: npm test -- integration -t receipts
set -eu
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
need_node
need_data_folder
need_packages
need_mariadb
need_debian chromium chromium
need_debian pdftotext poppler-utils
need_debian hledger hledger
exec node --conditions=source --import tsx docker-free-scripts/supervisor/run-tests.ts "$@"
