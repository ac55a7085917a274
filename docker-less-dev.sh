#!/usr/bin/env bash
# Everything that this project needs on a Debian machine with Node.js 20, and the commands to run it. See --help.
# What runs once Node, the packages and PostgreSQL are there is in apps/api/dev/.
set -Eeuo pipefail

ROOT="$(cd -- "$(dirname -- "${BASH_SOURCE[0]}")" && pwd -P)"
DATA="$ROOT/.data"
NODE_NEEDED="20.19.0"
cd -- "$ROOT"

say() { printf '%s\n' "$*"; }
fail() {
  printf '\n%s\n' "$*" >&2
  exit 1
}

usage() {
  cat <<'TEXT'
./docker-less-dev.sh [command]

Without a command: opens Bellpull with the demo on http://127.0.0.1:8420 and keeps it in the foreground; Ctrl-C closes it.

  up      opens it in the background and returns when it is ready
  down    closes it, wherever it was opened
  reset   throws everything in the house away and loads the demo of today
  test    runs every check and test, and closes with one line "N passed, N failed"
  watch   for development: restarts the server and reloads the pages at every change
  bench   measures speed against the yardstick

Each command answers --help and may be given again at any time. What is missing is installed first: pnpm and the
packages inside this folder; PostgreSQL, and for tests Chromium, as Debian packages.

  BELLPULL_PORT            where Bellpull listens (8420); every other port follows from it
  BELLPULL_POSTGRES_PORT   where PostgreSQL listens (BELLPULL_PORT + 3000, or a free one)
  BELLPULL_LOG_LEVEL       how much the server says (info)
TEXT
}

help_for() {
  case "$1" in
    up) say "./docker-less-dev.sh up: opens Bellpull in the background and returns when /api/v1/health/ready answers 200.
What runs already is left alone; what has changed is built and started anew. Logs are in .data/log." ;;
    down) say "./docker-less-dev.sh down: closes what this folder started: server, mail catcher, PostgreSQL. The data stays." ;;
    reset) say "./docker-less-dev.sh reset: throws everything in the house away and loads the demo of today.
Works whether the house is open or not, and leaves it as it was." ;;
    test) say "./docker-less-dev.sh test: build, types, lint, format, every test on a PostgreSQL of its own, and the journeys in
Chromium. All of them run, also after a failure; the last line counts them together. Needs no open house." ;;
    watch) say "./docker-less-dev.sh watch: PostgreSQL, mail catcher, the server restarted and the pages reloaded at every change,
with their words in this window. Ctrl-C closes them." ;;
    bench) say "./docker-less-dev.sh bench [options]: measures speed against the yardstick on a PostgreSQL of its own.
Options are handed on to apps/api/bench." ;;
    *) usage ;;
  esac
}

need_node() {
  local found
  command -v node >/dev/null || fail "Node.js is not on this machine. Bellpull needs version $NODE_NEEDED or later: https://nodejs.org"
  found="$(node -p process.versions.node)"
  if [[ "$(printf '%s\n%s\n' "$NODE_NEEDED" "$found" | sort -V | head -n 1)" != "$NODE_NEEDED" ]]; then
    fail "Node.js is $found ($(command -v node)). Bellpull needs version $NODE_NEEDED or later: https://nodejs.org"
  fi
}

need_folder() {
  local folder
  for folder in "$ROOT" "$DATA" "$DATA/stamp" "$DATA/run" "$ROOT/node_modules" "$ROOT/.tools"; do
    [[ ! -e "$folder" || -w "$folder" ]] || fail "$(id -un) may not write in $folder (it belongs to $(stat -c %U "$folder")). Run the command as that user or as root."
  done
  mkdir -p -- "$DATA/stamp" "$DATA/log" "$DATA/run"
}

need_pnpm() {
  local version prefix
  version="$(sed -n 's/.*"packageManager": *"pnpm@\([0-9.]*\).*/\1/p' package.json)"
  [[ "$(cd / && pnpm --version 2>/dev/null || true)" != "$version" ]] || return 0
  prefix="$ROOT/.tools/pnpm-$version"
  if [[ ! -x "$prefix/bin/pnpm" ]]; then
    command -v npm >/dev/null || fail "npm is not on this machine. It comes with Node.js and is needed once, to install pnpm into .tools."
    say "Installing pnpm $version into .tools"
    npm install --global --prefix "$prefix" --no-fund --no-audit "pnpm@$version"
  fi
  export PATH="$prefix/bin:$PATH"
}

need_packages() {
  local stamp="$DATA/stamp/packages" wanted
  wanted="$(cat pnpm-lock.yaml pnpm-workspace.yaml package.json apps/*/package.json packages/*/package.json e2e/package.json <(node -p process.versions.modules) | sha256sum)"
  if [[ -d node_modules/.pnpm && -d apps/api/node_modules && -d apps/web/node_modules && -f "$stamp" && "$(cat "$stamp")" == "$wanted" ]]; then return; fi
  say "Installing the packages (half a minute on a new machine)"
  CI=true pnpm install --frozen-lockfile --reporter=append-only
  printf '%s' "$wanted" >"$stamp"
}

# Runs a command with the right to install.
as_root() {
  if [[ $EUID -eq 0 ]]; then
    "$@"
  elif [[ -t 0 ]]; then
    sudo "$@"
  else
    sudo -n "$@"
  fi
}

install_debian() {
  local name="$1" package="$2" attempt
  command -v apt-get >/dev/null || fail "$name is not on this machine, and this is no Debian on which this script could install it. Install $name and try again."
  if [[ $EUID -ne 0 ]]; then
    command -v sudo >/dev/null || fail "$name is not on this machine, and $(id -un) may not install it (there is no sudo). As root: apt-get install --no-install-recommends $package"
    as_root true || fail "$name is not on this machine, and sudo does not let $(id -un) install it. As root: apt-get install --no-install-recommends $package"
  fi
  say "Installing $name (Debian package $package)"
  if [[ "$package" == postgresql && ! -e /etc/postgresql-common/createcluster.conf ]]; then
    # We keep our own data, so Debian need not lay and start a cluster of its own.
    as_root mkdir -p /etc/postgresql-common
    printf 'create_main_cluster = false\n' | as_root tee /etc/postgresql-common/createcluster.conf >/dev/null
  fi
  for attempt in 1 2 3; do
    # The lists may be locked by another clone that installs at the same moment; dpkg's own lock is waited for below.
    if as_root apt-get update -q; then break; fi
    [[ $attempt -lt 3 ]] || fail "apt-get update failed; the lines above say why."
    sleep 5
  done
  as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -q --no-install-recommends \
    -o DPkg::Lock::Timeout=600 -o Dpkg::Options::=--force-confold "$package" ||
    fail "$name could not be installed; the lines above say why."
}

has_postgres() {
  local program
  for program in /usr/lib/postgresql/*/bin/initdb; do
    if [[ -x "$program" ]]; then return 0; fi
  done
  command -v initdb >/dev/null && command -v pg_ctl >/dev/null
}

need_postgres() {
  has_postgres || install_debian PostgreSQL postgresql
}

need_chromium() {
  if [[ -z "${BELLPULL_CHROMIUM:-}" ]]; then
    command -v chromium >/dev/null || install_debian Chromium chromium
    BELLPULL_CHROMIUM="$(command -v chromium)"
  fi
  export BELLPULL_CHROMIUM
}

# One command of this folder installs at a time; a second one waits and then finds everything there.
prepare() {
  need_node
  need_folder
  exec 9>"$DATA/run/install.lock"
  if ! flock -n 9; then
    say "Another command of this folder is installing; waiting for it."
    flock -w 900 9 || fail "The other command has been installing for 15 minutes. Try again when it is done."
  fi
  need_pnpm
  need_packages
  need_postgres
  if [[ "${1:-}" == browser ]]; then need_chromium; fi
  exec 9>&-
}

house() {
  exec node --import tsx apps/api/dev/house.ts "$1"
}

command="${1:-foreground}"
if [[ $# -gt 0 ]]; then shift; fi
case "$command" in
  -h | --help | help)
    usage
    exit 0
    ;;
  foreground | up | down | reset | test | watch | bench) ;;
  *)
    usage >&2
    fail "There is no command \"$command\"."
    ;;
esac
for argument in "$@"; do
  if [[ "$argument" == -h || "$argument" == --help ]]; then
    help_for "$command"
    exit 0
  fi
done
if [[ $# -gt 0 && "$command" != bench ]]; then fail "The command \"$command\" takes no \"$*\"; see ./docker-less-dev.sh $command --help"; fi

case "$command" in
  down)
    if [[ ! -d "$DATA/run" ]]; then
      say "The house is closed already."
      exit 0
    fi
    prepare
    house down
    ;;
  test)
    prepare browser
    exec node --import tsx apps/api/dev/test-all.ts
    ;;
  bench)
    prepare
    exec pnpm run bench "$@"
    ;;
  *)
    prepare
    house "$command"
    ;;
esac
