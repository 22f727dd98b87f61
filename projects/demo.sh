#!/usr/bin/env bash
# Sets up the machine and issues the demonstration projects; tells where the packages are.
set -euo pipefail
# shellcheck source=.ci/setup.sh
source "$(dirname "${BASH_SOURCE[0]}")/../.ci/setup.sh"

need_libraries
need_environment ''

for project in "$root"/projects/*/; do
  project=${project%/}
  status=0
  "$root/.venv/bin/headtrace" issue "$project" || status=$?
  [[ $status -le 1 ]] || exit "$status"

  package=$(find "$project/issued" -mindepth 1 -maxdepth 1 -type d -printf '%T@ %p\n' 2>/dev/null |
    sort -n | tail -n 1 | cut -d ' ' -f 2-) || true
  for file in package.pdf package.html results.json; do
    [[ -n $package && -s $package/$file ]] || { say "no package was written: $file is missing"; exit 70; }
  done
  if [[ $status -eq 1 ]]; then
    # 1 says that a criterion is not met; hold it to that
    grep -q '"met": *false' "$package/results.json" || { say "status 1, and yet every criterion is met"; exit 70; }
    printf '\nA criterion is not met, and the first page says so: the package is issued all the same.\n'
  fi
  printf '\nThe package to print and file:    %s\nThe same, to walk through:        %s\n\n' \
    "$package/package.pdf" "$package/package.html"
done
