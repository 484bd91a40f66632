# Building the product, serving it by two processes, and stopping them. Sourced by docker-free-dev.sh, after cluster.sh.
# shellcheck shell=bash

# ---- Building -----------------------------------------------------------------------------------------------------------------

# What the build is made of, as one number.
sources_hash() {
  local rooms=() room
  for room in app components entities fixtures jobs lib migrations public; do [ ! -d "$room" ] || rooms+=("$room"); done
  { find "${rooms[@]}" -type f -print0 | sort -z | xargs -0 sha256sum
    sha256sum ./*.ts ./*.mjs ./package-lock.json ./tsconfig.json; } | sha256sum | cut -c1-32
}

build_is_current() { [ -f .next/BUILD_ID ] && [ "$(cat dist/.build-stamp 2>/dev/null)" = "$1" ]; }

# Who serves a build holds a shared lock on it (number 8, which web and worker inherit); who builds needs it alone.
start_build() {
  BUILD_PID='' BUILD_HASH=$(sources_hash)
  exec 8>"$ROOT/.slackwater/build.lock"
  if build_is_current "$BUILD_HASH"; then
    flock -s 8
    return 0
  fi
  flock -x -n 8 || die "The sources changed since the build that another copy serves from this folder. Stop that copy first."
  say "Building (the log is $DATA/log/build.log) ..."
  rm -f dist/.build-stamp
  logged programs node --import tsx lib/build/programs.ts
  node node_modules/next/dist/bin/next build >"$DATA/log/build.log" 2>&1 &
  BUILD_PID=$!
}

finish_build() {
  if [ -n "$BUILD_PID" ]; then
    wait "$BUILD_PID" || { tail -n 30 "$DATA/log/build.log" >&2 && die "\"next build\" failed; all it said is in $DATA/log/build.log."; }
    BUILD_PID=''
    printf '%s\n' "$BUILD_HASH" >dist/.build-stamp
  fi
  flock -s 8
}

# ---- Serving ------------------------------------------------------------------------------------------------------------------

# A process is named by its number and the moment it began, so that a number given to another one is not mistaken for it.
began() {
  local stat
  stat=$(cat "/proc/$1/stat" 2>/dev/null) || return 1
  read -r -a stat <<<"${stat##*) }"
  [ "${stat[0]}" != Z ] && printf '%s@%s\n' "${stat[19]}" "$(cat /proc/sys/kernel/random/boot_id)"
}

remember() { printf '%s %s\n' "$2" "$(began "$2")" >"$DATA/run/$1"; }

# alive NAME: its number, when the process remembered under that name still runs.
alive() {
  local pid start
  { read -r pid start <"$DATA/run/$1"; } 2>/dev/null || return 1
  [ -n "$start" ] && [ "$(began "$pid")" = "$start" ] && printf '%s\n' "$pid"
}

# end NAME...: asks all politely, waits, insists after 10 seconds (a browser's unused
# connection keeps the web server waiting for ever), and clears away what children they left in their sessions.
end() {
  local name pid deadline=$((SECONDS + 10))
  local -A pids=()
  for name; do
    pid=$(alive "$name") || continue
    pids[$name]=$pid
    kill -TERM "$pid" 2>/dev/null || true
  done
  for name in "${!pids[@]}"; do
    while [ "$SECONDS" -lt "$deadline" ] && alive "$name" >/dev/null; do sleep 0.1; done
    kill -KILL -- "-${pids[$name]}" 2>/dev/null || true
  done
  for name; do rm -f "$DATA/run/$name"; done
}

service_settings() {
  local public=${PUBLIC_URL:-} made_fakes=1 made_demo=1
  [[ $public != https:* ]] || made_fakes=0 made_demo=0
  [ -z "${RESEND_API_KEY:-}" ] || made_fakes=0
  export PORT HOST LOCAL_FAKES=${LOCAL_FAKES:-$made_fakes} DEMO=${DEMO:-$made_demo}
  APP_SECRET=${APP_SECRET:-$(secret "$DATA" app-secret)}
  export APP_SECRET
  local reach=$HOST
  case $HOST in 0.0.0.0) reach=127.0.0.1 ;; ::) reach='[::1]' ;; *:*) reach="[$HOST]" ;; esac
  LOCAL_URL=http://$reach:$PORT
}

load_demo() {
  [ "$DEMO" = 1 ] || return 0
  # Kept, because what opens the demo is the password it was loaded with.
  [[ ${PUBLIC_URL:-} == https:* ]] || DEMO_PASSWORD=$(secret "$DATA" demo-password "${DEMO_PASSWORD:-still-water-runs-back}")
  export DEMO_PASSWORD
  step "$@" > >(tee "$DATA/log/demo.log")
}

# start_service NAME COMMAND...: in a session of its own, so that Ctrl-C reaches only this script, which stops things in order.
start_service() {
  local name=$1 log=$DATA/log/$1.log
  shift
  [ ! -f "$log" ] || mv "$log" "$log.1"
  setsid "$@" >"$log" 2>&1 </dev/null 6>&- 7>&- 9>&- &
  remember "$name" $!
  disown $! # what ends it is said by check_services
}

is_ready() {
  node -e 'fetch(process.argv[1], { signal: AbortSignal.timeout(30000) }).then((answer) => process.exit(answer.ok ? 0 : 1), () => process.exit(1))' \
    "$1/api/v1/health/ready"
}

# Says what ended by itself, with the end of its log; the exit handler stops the rest.
check_services() {
  local name
  [ -n "$GIVEN_URL" ] || cluster_pid "$DATA" >/dev/null || die "The database server ended by itself. All it said is in $DATA/cluster/server.log."
  for name in web worker; do
    alive "$name" >/dev/null || { tail -n 20 "$DATA/log/$name.log" >&2 && die "The $name process ended by itself. All it said is in $DATA/log/$name.log."; }
  done
}

leave() {
  local code=$?
  trap '' INT TERM HUP
  trap - EXIT
  [ -z "${STEP_PID:-}" ] || kill -TERM "$STEP_PID" 2>/dev/null || true
  [ -z "${BUILD_PID:-}" ] || kill -TERM "$BUILD_PID" 2>/dev/null || true
  end worker web
  [ -n "$GIVEN_URL" ] || release_cluster "$DATA"
  rm -f "$DATA/run/script" "$DATA/run/address" "$DATA/run/listens"
  [ "$code" != 0 ] || say "Stopped."
  exit "$code"
}

serve() {
  local mode=$1 deadline
  check_node
  make_data_folder
  service_settings
  exec 6>"$DATA/run/lock"
  if ! flock -n 6; then
    say "Slackwater already runs from $DATA: $(cat "$DATA/run/address" 2>/dev/null || echo 'it is just starting')"
    return 0
  fi
  end worker web # left over when an earlier run was killed
  check_port "$PORT" "$HOST" PORT
  trap leave EXIT
  trap 'exit 0' INT TERM HUP
  remember script $$
  need_packages
  local migrate=(node dist/migrate.js) demo=(node dist/load-demo.js) web=(node node_modules/next/dist/bin/next start) worker=(node dist/worker.js) node_env=production
  if [ "$mode" = dev ]; then
    migrate=(node --import tsx jobs/migrate.ts) demo=(node --import tsx jobs/load-demo.ts) web=(node node_modules/next/dist/bin/next dev) worker=(node --watch --import tsx jobs/worker.ts) node_env=development
  fi
  open_database
  [ "$mode" = dev ] || start_build
  step "${migrate[@]}"
  load_demo "${demo[@]}"
  [ "$mode" = dev ] || finish_build
  start_service web env -u DATABASE_URL -u DATABASE_WORKER_URL "${web[@]}" -H "$HOST" -p "$PORT"
  start_service worker env -u DATABASE_URL -u DATABASE_APP_URL NODE_ENV="$node_env" "${worker[@]}"
  deadline=$((SECONDS + 180))
  until is_ready "$LOCAL_URL"; do
    check_services
    [ "$SECONDS" -lt "$deadline" ] || die "It did not become ready in 3 minutes. See $DATA/log/web.log and $DATA/log/worker.log."
    sleep 0.3
  done
  printf '%s\n' "${PUBLIC_URL:-$LOCAL_URL}" >"$DATA/run/address"
  # `status` is asked in another shell, where PORT need not be set: it looks where this copy listens.
  printf '%s\n' "$LOCAL_URL" >"$DATA/run/listens"
  greet
  [ "$mode" != dev ] || tail -q -n 0 --pid=$$ -F "$DATA/log/web.log" "$DATA/log/worker.log" 2>/dev/null 6>&- 8>&- &
  while :; do
    check_services
    sleep 1 &
    wait $! || true
  done
}

greet() {
  say "" "Slackwater is ready at ${PUBLIC_URL:-$LOCAL_URL}"
  [ "$LOCAL_FAKES" != 1 ] || say "Mails stay on this machine: $LOCAL_URL/dev/mailbox"
  # A database with organizations of its own gets no demo.
  if [ "$DEMO" = 1 ] && grep -qs 'demo is loaded' "$DATA/log/demo.log"; then
    say "Demo sign-ins: owner@demo.example, engineer@demo.example, consultant@demo.example, operator@demo.example"
    say "Password:      $DEMO_PASSWORD"
  fi
  say "Logs:          $DATA/log" "Ctrl-C stops it."
}
