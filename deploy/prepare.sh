# Sourced by deploy/demo and deploy/test: packages, Node and the build on a fresh Debian 12. Every step looks first
# and says nothing where nothing is to do. Failure prints what went wrong and what to do, and ends the script.
# shellcheck shell=bash disable=SC2034

ROOT=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd)
BUILD=${HEARTHFRONT_BUILD:-$ROOT/build}

BUILD_PACKAGES=(g++ cmake ninja-build ccache pkg-config libcpp-httplib-dev nlohmann-json3-dev libsqlitecpp-dev
  libsqlite3-dev libspdlog-dev libeigen3-dev doctest-dev libtomlplusplus-dev libcli11-dev prometheus-cpp-dev
  libssl-dev zlib1g-dev libbrotli-dev libhowardhinnant-date-dev tzdata curl
  libcurl4-openssl-dev libmosquitto-dev)
# libsundials-dev brings a large numerics stack along: only the tests that compare with it want it.
# A broker, a mail server and certificates: what alerts are sent to in the tests.
TEST_PACKAGES=(libsundials-dev sqlite3 chromium fonts-dejavu-core
  mosquitto mosquitto-clients python3-aiosmtpd openssl)

say() { printf '%s\n' "$*"; }
fail() {
  printf 'hearthfront: %s\n' "$*" >&2
  exit 1
}

# Runs "$@" with its output in a log; shows the end of the log only when it fails.
quietly() {
  local log=$1
  shift
  mkdir -p "$(dirname "$log")"
  if ! "$@" >"$log" 2>&1 </dev/null; then
    tail -n 40 "$log" >&2
    fail "this step failed: $* (all of it: $log)"
  fi
}

as_root() {
  if [ "$(id -u)" = 0 ]; then
    "$@"
  elif command -v sudo >/dev/null; then
    sudo "$@"
  else
    fail "packages are missing and this user is neither root nor has sudo. As root, run:
  apt-get update && apt-get install -y --no-install-recommends ${MISSING[*]}"
  fi
}

MISSING=()
need_packages() {
  command -v dpkg-query >/dev/null || fail "this is no Debian system: install the equivalents of $* yourself"
  local package
  for package in "$@"; do
    if [ "$(dpkg-query -W -f '${db:Status-Status}' "$package" 2>/dev/null)" != installed ]; then
      MISSING+=("$package")
    fi
  done
  # Any Node from 18 on will do, from wherever it came.
  if ! command -v node >/dev/null; then MISSING+=(nodejs); fi
  if ! command -v npm >/dev/null; then MISSING+=(npm); fi
  if [ ${#MISSING[@]} -gt 0 ]; then
    say "Installing packages: ${MISSING[*]}"
    # Root's rights are asked for here, where a password can still be typed; the long output goes to a log.
    as_root true
    export DEBIAN_FRONTEND=noninteractive
    quietly "$BUILD/logs/apt-update.log" as_root apt-get -q update
    quietly "$BUILD/logs/apt-install.log" as_root env DEBIAN_FRONTEND=noninteractive \
      apt-get -q install -y --no-install-recommends "${MISSING[@]}"
    MISSING=()
  fi
  local major
  major=$(node -p 'process.versions.node.split(".")[0]')
  [ "$major" -ge 18 ] || fail "Node $major is too old: 18 or newer is needed (apt-get install nodejs, or put a newer one first in PATH)"
}

# npm ci for folder $1, only when the lock file changed since the last time.
npm_modules() {
  local folder=$1 mark=$1/node_modules/.lock-installed name
  name=$(basename "$folder")
  if ! cmp -s "$folder/package-lock.json" "$mark"; then
    say "Fetching the packages that $name is built with"
    quietly "$BUILD/logs/npm-$name.log" npm --prefix "$folder" ci --no-audit --no-fund
    # A folder without dependencies gets no node_modules from npm.
    mkdir -p "$folder/node_modules"
    cp "$folder/package-lock.json" "$mark"
  fi
}

build_web() {
  local web=$ROOT/web
  npm_modules "$web"
  local newer=
  if [ -f "$web/dist/index.html" ]; then
    newer=$(find "$web" \( -path "$web/node_modules" -o -path "$web/dist" -o -path "$web/.esbuild" \) -prune -o \
      -type f -newer "$web/dist/index.html" -print -quit)
    [ -n "$newer" ] || return 0
  fi
  say "Building the dashboard"
  quietly "$BUILD/logs/web.log" npm --prefix "$web" run build
  touch "$web/dist/index.html"
}

# The dashboard is part of the binary, so it is built first. $1: a target, or empty for everything.
build_daemon() {
  local target=${1:-} arguments=(--build "$BUILD" -j "$(nproc)")
  # Everything is configured anew each time: a library that was missing for the tests may be there now.
  if [ ! -f "$BUILD/build.ninja" ] || [ -z "$target" ]; then
    quietly "$BUILD/logs/configure.log" cmake -S "$ROOT" -B "$BUILD" -G Ninja -DCMAKE_BUILD_TYPE=RelWithDebInfo
  fi
  [ -z "$target" ] || arguments+=(--target "$target")
  # Said only where there is something to wait for.
  (sleep 3 && say "Building hearthfront (the first time takes some minutes)") &
  local teller=$!
  # shellcheck disable=SC2064
  trap "kill $teller 2>/dev/null || true" EXIT
  quietly "$BUILD/logs/build.log" cmake "${arguments[@]}"
  kill "$teller" 2>/dev/null || true
  wait "$teller" 2>/dev/null || true
  trap - EXIT
}

daemon_path() {
  local path
  for path in ${HEARTHFRONT_BIN:+"$HEARTHFRONT_BIN"} "$BUILD/hearthfront" "$BUILD/server/hearthfront"; do
    if [ -x "$path" ]; then
      printf '%s\n' "$path"
      return
    fi
  done
  fail "there is no hearthfront binary in $BUILD yet: run deploy/demo without --no-build"
}

port_taken() { (exec 3<>"/dev/tcp/127.0.0.1/$1") 2>/dev/null; }
