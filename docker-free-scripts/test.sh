#!/usr/bin/env bash
# npm test: set-up, then every group of tests. A group that ran no tests fails.
set -uo pipefail
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
set -e
ensure_debian chromium chromium
ensure_debian gp pari-gp
ensure_packages
started=$(date +%s)
export TEST_DATABASE_URL=${TEST_DATABASE_URL:-$(PALMETTE_PG_FAST=1 bash docker-free-scripts/postgres.sh start .palmette/test-postgres)}
trap 'bash docker-free-scripts/postgres.sh stop .palmette/test-postgres >/dev/null 2>&1 || true' EXIT
node docker-free-scripts/build.mjs
set +e
node docker-free-scripts/test-groups.mjs
code=$?
printf 'npm test took %s s\n' "$(( $(date +%s) - started ))"
exit $code
