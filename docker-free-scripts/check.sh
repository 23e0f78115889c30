#!/usr/bin/env bash
# Types, lint, format, rules and unit tests. Edits nothing.
set -euo pipefail
cd "$(dirname "$0")/.."
. docker-free-scripts/setup.sh
ensure_packages
for workspace in packages/* apps/server apps/station apps/cli tests; do
  npx tsc -p "$workspace"
done
npx vue-tsc -p apps/web --noEmit
npx eslint --config .eslint.config.mjs .
npx prettier --config .prettierrc.json --check . --log-level warn
npx vitest run --config tests/vitest.config.ts tests/architecture
npx vitest run --config tests/vitest.config.ts packages
