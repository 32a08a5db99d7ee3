#!/usr/bin/env bash
# setup.sh: makes ready what the tests need from outside npm, or names the suites that will be left out and why.
set -u

# Debian package, command line that proves it is there, what is left out without it.
needs=(
  "python3-numpy|/usr/bin/python3 -c 'import numpy' || python3 -c 'import numpy'|the suites that compare with NumPy (tests/oracle)"
  "gfortran|gfortran --version|the suites that read files written by Fortran"
  "chromium|chromium --version|the suites that open pages in a real browser (tests/pages)"
)

present() { bash -c "$1" >/dev/null 2>&1; }

missing=()
left_out=0
for need in "${needs[@]}"; do
  package=${need%%|*}
  rest=${need#*|}
  present "${rest%|*}" || missing+=("$package")
done
[ ${#missing[@]} -eq 0 ] && exit 0

if [ "$(id -u)" = 0 ] && command -v apt-get >/dev/null 2>&1; then
  echo "setup: installing ${missing[*]}"
  export DEBIAN_FRONTEND=noninteractive
  install() { apt-get install -y -q --no-install-recommends "${missing[@]}" >/dev/null 2>&1; }
  install || { apt-get update -q >/dev/null 2>&1 && install; } || echo "setup: apt-get could not install ${missing[*]}"
  why="apt-get could not install it"
else
  why="installing it needs root and apt-get"
fi

for need in "${needs[@]}"; do
  package=${need%%|*}
  rest=${need#*|}
  present "${rest%|*}" && continue
  echo "setup: left out: ${rest##*|}: $package is missing ($why)"
  left_out=1
done
# With CI=true every suite must run: there a missing tool is a failure, not a note.
[ "${CI:-}" != true ] || [ "$left_out" = 0 ]
