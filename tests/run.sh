#!/usr/bin/env bash
# Sets up the machine and runs every check. Arguments go to pytest: bash tests/run.sh -k bracketing
set -euo pipefail
# shellcheck source=.ci/setup.sh
source "$(dirname "${BASH_SOURCE[0]}")/../.ci/setup.sh"

need_libraries
need_browser
need_environment '[dev]'
cd "$root"

failed=()
# check NAME COMMAND…: run a check; go on after a failure, so that one run tells all.
check() {
  printf '\n== %s\n' "$1"
  local name=$1
  shift
  "$@" || failed+=("$name")
}

bin=$root/.venv/bin
check "ruff check" "$bin/ruff" check --no-cache --output-format concise calc tests .build
check "ruff format" "$bin/ruff" format --check --no-cache calc tests .build
check "mypy" "$bin/mypy" calc .build/cutting.py
check "import contracts" "$bin/lint-imports" --no-cache
check "tests" "$bin/pytest" -n 2 --cov --cov-branch --cov-report=term "$@"

if [[ ${#failed[@]} -gt 0 ]]; then
  printf '\nnot passed: %s\n' "$(IFS=,; echo "${failed[*]}")"
  exit 1
fi
