#!/usr/bin/env bash
# npm run bench: the figures of tests/bench/RESULTS.md. Prints tables; nothing is asserted.
set -euo pipefail
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
ensure_packages
node docker-free-scripts/build.mjs --no-client
node --conditions=source --import tsx tests/bench/rows/run.ts
node --conditions=source --import tsx tests/bench/stack/run.ts
