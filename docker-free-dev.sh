#!/usr/bin/env bash
# Slackwater on one machine without containers: database, build, web server and worker. `help` says what it does and reads.
# Only processes that this script started are ever stopped, each by its number.
set -euo pipefail

CALLED_FROM=$PWD
ROOT=$(cd "$(dirname "${BASH_SOURCE[0]}")" && pwd -P)
cd "$ROOT"

usage() {
  cat <<'END'
usage: ./docker-free-dev.sh [command]

  (none)    install what is missing, start the database, migrate, load the demo into an empty database, build if stale,
            serve; Ctrl-C stops everything it started
  dev       the same with live reload instead of a build
  test      everything continuous integration runs, on a throwaway database
  bench     time the main job on a throwaway product: a week from file to chart, a year's import, beside a script's
  status    what runs here (exit 0 when it serves, 3 when not)
  stop      stop web, worker and database of this data folder
  psql      open the database as its owner; `psql app` and `psql worker` as those roles; further words go to psql
  reset     delete this data folder's database, secrets and logs (asks first; --yes does not ask)
  help      this text

Settings come from the environment; what is not set gets the value in brackets.
  PORT [3000] and HOST [127.0.0.1]    where the web server listens
  PGPORT [54329]                      where this copy's own database listens, on loopback only
  SLACKWATER_DATA [./.slackwater]     database, secrets, logs. As root, and where the user postgres may not enter,
                                      /var/lib/slackwater-<number> is used instead. Two copies need two folders and four ports.
  DATABASE_URL [own database]         the owner's connection to an existing server, which is then used and never stopped;
                                      the owner needs CREATEROLE
  DATABASE_APP_URL, DATABASE_WORKER_URL [made from the above]
                                      roles slackwater_app and slackwater_worker; give them, and APP_SECRET, when several
                                      machines share one database
  APP_SECRET [made and kept]          signs links in mails
  PUBLIC_URL [none]                   the address people open, such as https://slackwater.example
  RESEND_API_KEY, RESEND_BASE_URL, RESEND_WEBHOOK_SECRET, MAIL_FROM
                                      the mail service and the sender; without a key mails stay here, at /dev/mailbox
  LOCAL_FAKES [1 without RESEND_API_KEY and without an https PUBLIC_URL]
  DEMO [1, or 0 with an https PUBLIC_URL], DEMO_PASSWORD [still-water-runs-back]
  SIGN_UP [on], UPLOAD_LIMIT_BYTES [2147483648], LOG_LEVEL [info]
END
}

say() { printf '%s\n' "$@"; }
die() {
  printf 'Slackwater: %s\n' "$*" >&2
  exit 1
}

# ---- Settings and folders -----------------------------------------------------------------------------------------------------

PORT=${PORT:-3000} HOST=${HOST:-127.0.0.1} PGPORT=${PGPORT:-54329}
DATABASE_URL=${DATABASE_URL:-} DATABASE_APP_URL=${DATABASE_APP_URL:-} DATABASE_WORKER_URL=${DATABASE_WORKER_URL:-}
GIVEN_URL=$DATABASE_URL
unset NODE_ENV
export NEXT_TELEMETRY_DISABLED=1

# Where the user postgres could not walk to its own files, the data goes to a place it can.
choose_data_folder() {
  DATA=$(cd "$CALLED_FROM" && realpath -m "${SLACKWATER_DATA:-$ROOT/.slackwater}")
  [ "$(id -u)" = 0 ] || return 0
  local folder=$DATA
  while [ "$folder" != / ]; do
    if [ -d "$folder" ] && [[ $(stat -c %A "$folder") != *[xt] ]]; then
      DATA=/var/lib/slackwater-$(printf %s "$DATA" | sha256sum | cut -c1-12)
      return 0
    fi
    folder=$(dirname "$folder")
  done
}

make_data_folder() {
  if [ ! -d "$DATA" ]; then
    mkdir -p "$DATA" || die "The folder $DATA cannot be made. Set SLACKWATER_DATA to another one."
    chmod 711 "$DATA"
  fi
  [ -w "$DATA" ] || die "The folder $DATA belongs to another user. Run as that user, or set SLACKWATER_DATA to another folder."
  mkdir -p "$DATA/log" "$DATA/run" "$ROOT/.slackwater"
}

# secret FOLDER NAME [VALUE]: the kept value, made on first use.
secret() {
  local file=$1/secrets/$2
  if [ ! -s "$file" ]; then
    (umask 077 && mkdir -p "$1/secrets" && printf '%s\n' "${3:-$(od -An -v -tx1 -N32 /dev/urandom | tr -d ' \n')}" >"$file.new" && mv "$file.new" "$file")
  fi
  cat "$file"
}

check_node() {
  [ -r /proc/self/stat ] || die "this script needs Linux with /proc."
  command -v node >/dev/null || die "Node.js is missing. Install version 20.9 or later (nodejs.org), then run this again."
  node -e 'const [a, b] = process.versions.node.split("."); process.exit(a > 20 || (a == 20 && b >= 9) ? 0 : 1)' ||
    die "Node.js $(node -v) is too old. Install version 20.9 or later (nodejs.org), then run this again."
}

# check_port NUMBER HOST NAME
check_port() {
  { [[ $1 =~ ^[0-9]{1,5}$ ]] && [ "$1" -ge 1 ] && [ "$1" -le 65535 ]; } || die "$3 must be a port from 1 to 65535, not \"$1\"."
  local code=0
  node -e 'const server = require("node:net").createServer();
    server.once("error", (error) => process.exit({ EADDRINUSE: 11, EACCES: 12 }[error.code] ?? 13));
    server.listen(Number(process.argv[1]), process.argv[2], () => server.close())' "$1" "$2" || code=$?
  case $code in
    0) ;;
    11) die "Port $1 on $2 is taken by another program. Set $3 to a free port, for example: $3=$(free_port) $0" ;;
    12) die "Port $1 needs more rights than this user has. Set $3 to a port above 1023." ;;
    *) die "This machine cannot listen on $2. Set HOST to an address of its own." ;;
  esac
}

free_port() {
  node -e 'const server = require("node:net").createServer(); server.listen(0, "127.0.0.1", () => { console.log(server.address().port); server.close(); })'
}

# ---- What has to be installed -------------------------------------------------------------------------------------------------

# install_package NAME WHY
install_package() {
  local sudo=() log=$DATA/log/apt.log
  if [ "$(id -u)" != 0 ]; then
    sudo=(sudo -n)
    sudo -n true 2>/dev/null || die "$2 is missing. Install it, then run this again: sudo apt-get install $1"
  fi
  command -v apt-get >/dev/null || die "$2 is missing. Install it (Debian's package is $1), then run this again."
  say "Installing Debian's package $1 ..."
  local get=("${sudo[@]}" env DEBIAN_FRONTEND=noninteractive apt-get -qq -o DPkg::Lock::Timeout=180)
  # A new machine has no package lists; one in use need not fetch them again.
  "${get[@]}" install -y --no-install-recommends "$1" >"$log" 2>&1 </dev/null ||
    { "${get[@]}" update >>"$log" 2>&1 && "${get[@]}" install -y --no-install-recommends "$1" >>"$log" 2>&1 </dev/null; } ||
    { tail -n 5 "$log" >&2 && die "apt-get could not install $1; all it said is in $log."; }
}

need_packages() {
  exec 9>"$ROOT/.slackwater/install.lock"
  flock 9
  if ! node lib/build/dependencies.mjs; then
    say "Installing the packages of package-lock.json ..."
    logged npm npm ci --include=dev
  fi
  exec 9>&-
}

# A long step runs beside the shell, so that a signal to the shell is heard at once and passed on.
step() {
  "$@" 7>&- 9>&- &
  STEP_PID=$!
  local code=0
  wait "$STEP_PID" || code=$?
  STEP_PID=
  return "$code"
}

# logged NAME COMMAND...: a long step whose words go to a log; the end of them is shown when it fails.
logged() {
  local log=$DATA/log/$1.log
  shift
  step "$@" >"$log" 2>&1 || { tail -n 20 "$log" >&2 && die "\"$*\" failed; all it said is in $log."; }
}

# shellcheck source=lib/build/cluster.sh
. "$ROOT/lib/build/cluster.sh"
# shellcheck source=lib/build/services.sh
. "$ROOT/lib/build/services.sh"

# ---- Commands -----------------------------------------------------------------------------------------------------------------

stop() {
  local found=0 pid tries
  if pid=$(alive script); then
    kill -TERM "$pid"
    for tries in {1..600}; do
      alive script >/dev/null || break
      sleep 0.1
    done
    [ "$tries" -lt 600 ] || die "The script that serves (process $pid) does not end."
    found=1
  fi
  ! alive web >/dev/null || found=1
  ! alive worker >/dev/null || found=1
  end worker web
  ! stop_cluster "$DATA" || found=1
  if [ "$found" = 1 ]; then say "Stopped."; else say "Nothing of $DATA was running."; fi
}

status() {
  local serving=3 name pid
  say "Data folder:  $DATA"
  if [ -n "$GIVEN_URL" ]; then
    say "Database:     the server of DATABASE_URL"
  elif pid=$(cluster_pid "$DATA"); then
    say "Database:     running on port $(cluster_port "$DATA") (process $pid)"
  else
    say "Database:     not running$([ -f "$DATA/cluster/ready" ] || echo ', not made yet')"
  fi
  for name in web worker; do
    printf '%-13s %s\n' "${name^}:" "$(if pid=$(alive $name); then echo "running (process $pid)"; else echo 'not running'; fi)"
  done
  if alive script >/dev/null && service_settings && is_ready "$(cat "$DATA/run/listens" 2>/dev/null || echo "$LOCAL_URL")"; then
    serving=0
    say "Ready:        $(cat "$DATA/run/address" 2>/dev/null || echo "$LOCAL_URL")"
  else
    say "Ready:        no"
  fi
  return "$serving"
}

open_psql() {
  local url=DATABASE_URL
  case ${1:-} in
    app | worker)
      url=DATABASE_${1^^}_URL
      shift
      ;;
  esac
  [ -n "$GIVEN_URL" ] || [ -f "$DATA/cluster/ready" ] || die "There is no database in $DATA yet. Run $0 first."
  make_data_folder
  open_database
  [ -n "${PGBIN:-}" ] || find_postgres || true
  local psql=psql
  [ ! -x "${PGBIN:-}/psql" ] || psql=$PGBIN/psql
  trap '[ -n "$GIVEN_URL" ] || release_cluster "$DATA"' EXIT
  "$psql" "${!url}" "$@"
}

reset() {
  [ -z "$GIVEN_URL" ] || die "reset deletes only what this script made. Drop the database of DATABASE_URL yourself."
  if [ "${1:-}" != --yes ]; then
    [ -t 0 ] || die "reset deletes the database in $DATA. Say so with --yes."
    local answer
    read -r -p "Delete the database, secrets and logs in $DATA? Type yes: " answer
    [ "$answer" = yes ] || die "Nothing was deleted."
  fi
  [ ! -d "$DATA/run" ] || stop
  ! stop_cluster "$DATA/test" || say "Stopped the test database."
  rm -rf "$DATA/cluster" "$DATA/test" "$DATA/product" "$DATA/bench" "$DATA/secrets" "$DATA/log" "$DATA/run" "$DATA/cluster.lock" "$DATA/users.lock"
  rmdir "$DATA" 2>/dev/null || true
  say "Deleted what was in $DATA."
}

# A throwaway server for tests, shared by all who test this folder at once: it runs while anyone holds this command's input open.
# Prints KEY=VALUE lines. FRESH=1 means that nobody else uses it.
test_cluster() {
  [ "${1:-}" = hold ] || usage_error "test-cluster hold"
  local home=$DATA/test port
  make_data_folder
  port=$(free_port)
  start_cluster "$home" "$port" '-F -c synchronous_commit=off -c full_page_writes=off' >&2
  cluster_urls "$home"
  trap 'release_cluster "$DATA/test"' EXIT
  trap 'exit 0' TERM HUP
  trap '' INT
  say "DATABASE_URL=$DATABASE_URL" "DATABASE_APP_URL=$DATABASE_APP_URL" "DATABASE_WORKER_URL=$DATABASE_WORKER_URL" "FRESH=$CLUSTER_STARTED"
  cat >/dev/null
}

# What tests and measurements need besides; they start databases and products of their own, whatever is set for this one.
prepare_checks() {
  check_node
  make_data_folder
  need_postgres "$DATA/test"
  need_packages
  export SLACKWATER_DATA=$DATA
  unset DATABASE_URL DATABASE_APP_URL DATABASE_WORKER_URL PORT PGPORT HOST PUBLIC_URL APP_SECRET DEMO DEMO_PASSWORD
  unset "${!RESEND_@}" MAIL_FROM SIGN_UP UPLOAD_LIMIT_BYTES LOG_LEVEL LOCAL_FAKES
}

run_bench() {
  prepare_checks
  node --import tsx tests/bench/main-job.bench.ts
  exec node --import tsx tests/bench/peer-year.bench.ts
}

run_tests() {
  prepare_checks
  [ -n "${CHROMIUM_PATH:-}" ] || command -v chromium >/dev/null || install_package chromium 'The browser for the end-to-end tests'
  export CHROMIUM_PATH=${CHROMIUM_PATH:-$(command -v chromium)}
  exec node --import tsx lib/build/checks.ts
}

usage_error() {
  printf 'Slackwater: there is no command "%s".\n\n' "$1" >&2
  usage >&2
  exit 2
}

command=${1:-serve}
[ $# -eq 0 ] || shift
case $command in
  help | -h | --help) usage && exit 0 ;;
  serve | dev | test | bench | status | stop | psql | reset | test-cluster) ;;
  *) usage_error "$command" ;;
esac
choose_data_folder
case $command in
  serve | dev) serve "$command" ;;
  test) run_tests ;;
  bench) run_bench ;;
  status | stop | reset) "$command" "$@" ;;
  psql) open_psql "$@" ;;
  test-cluster) test_cluster "$@" ;;
esac
