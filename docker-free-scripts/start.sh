#!/usr/bin/env bash
# npm start: set-up, database, migrations, build, demo, server, station, local mail. Ctrl-C stops all of it.
set -euo pipefail
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh

ensure_packages
exec node docker-free-scripts/start.mjs
