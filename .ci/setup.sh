# Common set-up of tests/run.sh and projects/demo.sh: sourced, never run alone.
#
# It gives $root (the repository) and $python (the environment's interpreter), and the functions
#   need_libraries   the system libraries that layout needs
#   need_browser     a browser, for the tests that look at the HTML
#   need_environment EXTRAS   .venv with headtrace installed, editable
# What is missing is installed with apt as root or by sudo; without either it is named, and exit is 2.
# shellcheck shell=bash

root=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd -P)
python=$root/.venv/bin/python
export DEBIAN_FRONTEND=noninteractive LC_ALL=C.UTF-8 PIP_DISABLE_PIP_VERSION_CHECK=1
if [[ ${CI:-} == true ]]; then
  export NO_COLOR=1 PY_COLORS=0
  unset FORCE_COLOR CLICOLOR_FORCE
  exec </dev/null
fi

say() { printf '%s\n' "$*" >&2; }

# as_root COMMAND…: run as root, or fail with status 1 when that cannot be.
as_root() {
  if [[ $(id -u) -eq 0 ]]; then
    "$@"
  elif command -v sudo >/dev/null && { sudo -n true 2>/dev/null || [[ -t 0 && -t 2 ]]; }; then
    sudo DEBIAN_FRONTEND=noninteractive "$@"
  else
    return 1
  fi
}

may_install() {
  command -v apt-get >/dev/null &&
    { [[ $(id -u) -eq 0 ]] || { command -v sudo >/dev/null && { sudo -n true 2>/dev/null || [[ -t 0 && -t 2 ]]; }; }; }
}

# give_up WHAT PACKAGES…: name what is missing and stop.
give_up() {
  say "missing: $1"
  shift
  say "As an administrator of this machine run:  apt-get update && apt-get install -y $*"
  exit 2
}

updated=
# apt_install PACKAGES…: install those that this release of the system has; lists are fetched once, and only now.
apt_install() {
  local package known=()
  if [[ -z $updated ]]; then
    as_root apt-get update -qq >&2 || say "the lists of packages could not be renewed; going on with those that are here"
    updated=yes
  fi
  for package in "$@"; do
    # a name without a candidate is one that this release does not have
    if [[ $(apt-cache policy "$package" 2>/dev/null) =~ Candidate:\ [^\(] ]]; then known+=("$package"); fi
  done
  [[ ${#known[@]} -gt 0 ]] || return 1
  say "installing ${known[*]}"
  as_root apt-get install -y -qq --no-install-recommends "${known[@]}" >&2
}

# find_interpreter: print a Python of 3.11 or later that can make environments.
find_interpreter() {
  local name
  for name in python3 python3.13 python3.12 python3.11 python3.14; do
    if command -v "$name" >/dev/null &&
      "$name" -c 'import sys, ensurepip, venv, ctypes; sys.exit(sys.version_info < (3, 11))' 2>/dev/null; then
      command -v "$name"
      return
    fi
  done
  return 1
}

need_interpreter() {
  interpreter=$(find_interpreter) && return
  may_install || give_up "Python 3.11 or later with venv" python3 python3-venv
  # the system's own Python where it is new enough, else the newest that the release has beside it
  apt_install python3 python3-venv || true
  interpreter=$(find_interpreter) && return
  local version
  for version in 3.13 3.12 3.11; do
    apt_install "python$version" "python$version-venv" || continue
    interpreter=$(find_interpreter) && return
  done
  give_up "Python 3.11 or later with venv (this release of the system has none)" python3 python3-venv
}

# missing_libraries: print the shared libraries that cannot be loaded.
missing_libraries() {
  "$interpreter" - <<'END'
import ctypes
for name in ("libgobject-2.0.so.0", "libpango-1.0.so.0", "libpangoft2-1.0.so.0", "libharfbuzz.so.0",
             "libharfbuzz-subset.so.0", "libfontconfig.so.1"):
    try:
        ctypes.CDLL(name)
    except OSError:
        print(name)
END
}

need_libraries() {
  need_interpreter
  local packages=(libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz0b libharfbuzz-subset0 fontconfig) missing
  missing=$(missing_libraries)
  [[ -n $missing ]] || return 0
  may_install || give_up "$(tr '\n' ' ' <<<"$missing")" "${packages[@]}"
  apt_install "${packages[@]}" || true
  missing=$(missing_libraries)
  [[ -z $missing ]] || give_up "$(tr '\n' ' ' <<<"$missing")(still, after installing)" "${packages[@]}"
}

# A browser counts when it answers: on some systems a command of that name only asks for another installer.
find_browser() {
  local name
  for name in chromium google-chrome google-chrome-stable chromium-browser; do
    if command -v "$name" >/dev/null && timeout 20 "$name" --version >/dev/null 2>&1; then
      command -v "$name"
      return
    fi
  done
  return 1
}

need_browser() {
  if find_browser >/dev/null; then return; fi
  local what="Chromium or Chrome"
  may_install || give_up "$what" chromium
  apt_install chromium chromium-sandbox || true
  if find_browser >/dev/null; then return; fi
  say "On Ubuntu apt has no browser of its own: install Chrome or Chromium by other means."
  give_up "$what" chromium
}

# need_environment EXTRAS: '' or '[dev]'. Reuses .venv unless it was made at another path or by an older Python.
need_environment() {
  local extras=$1 stamp wanted
  need_interpreter
  if ! { grep -qF "$root/.venv" "$root/.venv/bin/activate" &&
    "$python" -c 'import sys, pip; sys.exit(sys.version_info < (3, 11))'; } 2>/dev/null; then
    say "making $root/.venv with $interpreter"
    "$interpreter" -m venv --clear "$root/.venv"
  fi
  stamp=$root/.venv/installed
  wanted="$extras $(cat "$root/pyproject.toml" "$root/.build/cutting.py" "$root/calc/__init__.py" | sha256sum)"
  # what was installed with more extras serves for less
  if [[ -f $stamp && -f $root/calc/publish/fonts/cut.sha256 ]] &&
    { [[ $(<"$stamp") == "$wanted" ]] || [[ -z $extras && $(<"$stamp") == "[dev]$wanted" ]]; }; then
    return
  fi
  say "installing headtrace$extras into $root/.venv"
  rm -f "$stamp"
  "$python" -m pip install --quiet --editable "$root$extras" >&2
  printf '%s' "$wanted" >"$stamp"
}
