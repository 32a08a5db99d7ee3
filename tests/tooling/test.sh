#!/usr/bin/env bash
# test.sh: everything behind `npm test`: set-up, build, checks, tests; arguments go to vitest. Fails if any step fails.
set -u
cd "$(dirname "${BASH_SOURCE[0]}")/../.." || exit 1

rm -rf .cache/tests
mkdir -p .cache/tests
[ -d node_modules ] || npm ci --no-progress || exit 1

failed=0
step() {
  echo "== $1"
  shift
  "$@" || { failed=1; printf '%s\n' "$*" >>.cache/tests/failed-steps; }
}
step "set-up" bash tests/tooling/setup.sh
step "build" npm run --silent build
step "check" npm run --silent check
step "test" npx vitest run --config tests/tooling/vitest.config.ts \
  --reporter=default --reporter=json --outputFile.json=.cache/tests/vitest.json "$@"
exit $failed
