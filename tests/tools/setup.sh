#!/bin/sh
# Installs the Debian packages that are missing: setup.sh GROUP... with the groups of the table below.
set -eu

# package | group | reason
packages() {
  cat <<'TABLE'
lua5.4|run|the Lua interpreter that runs the library and the command
liblapacke|run|LAPACKE, the linear algebra that the C core calls
libopenblas0|run|a fast BLAS and LAPACK below LAPACKE
lua-argparse|run|the command's argument parser
lua-filesystem|run|folders, for the command and its reports
gnuplot-nox|run|draws the plots of a report
gcc|build|the C compiler
libc6-dev|build|the C library's headers
pkg-config|build|tells the compiler where Lua and LAPACKE are
liblua5.4-dev|build|Lua's headers, for the binding
liblapacke-dev|build|LAPACKE's headers
lua-busted|test|the test runner
lua-cjson|run|reads records back, to compare runs
lua-check|lint|the Lua linter
clang-tidy|lint|the C linter
clang-format|lint|checks the layout of the C files
valgrind|lint|memory check of the whole test suite (make valgrind)
luarocks|reference|builds the rock in a folder of its own
ngspice|reference|circuit simulator that the exported models are run in
python3-scipy|reference|independent numerical reference
librsvg2-bin|reference|turns the drawings into pictures
tidy|reference|checks the HTML of a report
freefem++|reference|finite-element reference solutions
TABLE
}

wanted() {
  packages | while IFS='|' read -r package group reason; do
    for asked in "$@"; do
      if [ "$asked" = "$group" ]; then echo "$package|$reason"; fi
    done
  done
}

explain() { while IFS='|' read -r package reason; do printf '  %-18s %s\n' "$package" "$reason"; done; }

if ! command -v dpkg-query >/dev/null || ! command -v apt-get >/dev/null; then
  echo "This system has no apt-get. Please install what matches these Debian packages, then say so" >&2
  echo "with SETUP=: behind the make command, as in 'make test SETUP=:'." >&2
  wanted "$@" | explain >&2
  exit 1
fi

missing=$(wanted "$@" | while IFS='|' read -r package reason; do
  state=$(dpkg-query -W -f='${db:Status-Status}' "$package" 2>/dev/null || true)
  [ "$state" = installed ] || echo "$package|$reason"
done)
[ -n "$missing" ] || exit 0

echo "Installing these Debian packages:"
echo "$missing" | explain
as_root=
if [ "$(id -u)" != 0 ]; then
  as_root=sudo
  if ! command -v sudo >/dev/null; then
    echo "Installing needs root: run 'make setup' as root once, or install sudo." >&2
    exit 1
  fi
fi
names=$(echo "$missing" | cut -d'|' -f1)
$as_root apt-get -qq update
# The package names are meant to be split.
# shellcheck disable=SC2086
$as_root env DEBIAN_FRONTEND=noninteractive apt-get -qq -y --no-install-recommends install $names >/dev/null
