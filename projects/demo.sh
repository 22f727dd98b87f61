#!/usr/bin/env bash
# Sets up the machine and issues the demonstration project; tells where the package is.
set -euo pipefail
# shellcheck source=.ci/setup.sh
source "$(dirname "${BASH_SOURCE[0]}")/../.ci/setup.sh"

need_libraries
need_environment ''

project=$root/projects/ostrel-transfer-main
status=0
"$root/.venv/bin/headtrace" issue "$project" || status=$?
case $status in
  0) ;;
  1) printf '\nA criterion is not met, and the package says so on its first page: it is issued all the same.\n' ;;
  *) exit "$status" ;;
esac

package=$(find "$project/issued" -mindepth 1 -maxdepth 1 -type d -printf '%T@ %p\n' | sort -n | tail -n 1 | cut -d ' ' -f 2-)
printf '\nThe package to print and file:    %s\nThe same, to walk through:        %s\n' \
  "$package/package.pdf" "$package/package.html"
for file in package.pdf package.html; do
  [[ -s $package/$file ]] || { say "missing: $package/$file"; exit 70; }
done
