#!/usr/bin/env bash
# npm run bench, bench:peers, bench:scale: the figures of tests/bench/RESULTS.md. Prints tables; nothing is asserted.
set -euo pipefail
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
ensure_packages
node docker-free-scripts/build.mjs --no-client
what="${1:-rows}"
shift || true
case "$what" in
  rows)
    node --conditions=source --import tsx tests/bench/rows/run.ts
    node --conditions=source --import tsx tests/bench/stack/run.ts
    ;;
  peers | scale) node --conditions=source --import tsx "tests/bench/$what/run.ts" "$@" ;;
  *)
    echo "bench: expected nothing, peers or scale, found $what" >&2
    exit 2
    ;;
esac
