#!/usr/bin/env bash
# A private PostgreSQL cluster on loopback in one folder; no other cluster of the machine is touched.
#   postgres.sh start [FOLDER]   makes it if need be, starts it, prints its DATABASE_URL; safe to run again
#   postgres.sh stop [FOLDER]    stops it; nothing happens if it does not run
# FOLDER is .palmette/postgres if left out. PALMETTE_PG_PORT names the port; else a free one is taken and remembered.
# PALMETTE_PG_FAST=1 makes a cluster for tests that does not wait for the disk.
set -euo pipefail
cd "$(dirname "$0")/.."

complain() { printf '%s\n' "$*" >&2; }

command=${1:-}
folder=${2:-.palmette/postgres}
case $command in start | stop) ;; *) complain "postgres.sh: expected start or stop, found '$command'"; exit 2 ;; esac
mkdir -p "$folder"
folder=$(cd "$folder" && pwd -P)
data=$folder/data

# --- Debian's packages

newest_server() {
  local version
  if [ -f "$data/PG_VERSION" ]; then
    version=$(cat "$data/PG_VERSION")
  else
    version=$(ls /usr/lib/postgresql 2>/dev/null | sort -n | tail -1)
  fi
  bin=/usr/lib/postgresql/$version/bin
  [ -n "$version" ] && [ -x "$bin/initdb" ] && [ -x "$bin/psql" ]
}

install_server() {
  local as=
  if [ "$(id -u)" != 0 ]; then
    if sudo -n true 2>/dev/null; then as='sudo -n'; else
      complain 'Missing: PostgreSQL. Run as root:  apt-get install postgresql'
      exit 3
    fi
  fi
  complain "Installing from Debian's packages: postgresql"
  $as apt-get update -qq >/dev/null || true
  # without this the package would make and start a cluster of its own on the usual port
  $as mkdir -p /etc/postgresql-common/createcluster.d
  echo 'create_main_cluster = false' | $as tee /etc/postgresql-common/createcluster.d/palmette.conf >/dev/null
  $as env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends postgresql >/dev/null
  $as rm -f /etc/postgresql-common/createcluster.d/palmette.conf
}

# --- as whom: PostgreSQL refuses to run as root

as_owner() { "$@"; }
if [ "$(id -u)" = 0 ]; then
  # the ambient capability lets user postgres pass parents of mode 0700; where root has not got it, it has to do without
  drop=(setpriv --reuid=postgres --regid=postgres --init-groups)
  able=(--inh-caps=+dac_read_search --ambient-caps=+dac_read_search)
  as_owner() { (cd / && HOME=/ "${drop[@]}" "$@"); }
  prepare_owner() {
    if "${drop[@]}" "${able[@]}" true 2>/dev/null; then drop+=("${able[@]}"); fi
    chown postgres:postgres "$folder"
    # not `test -r`: access(2) does not count capabilities
    if ! as_owner ls "$folder" >/dev/null 2>&1; then
      complain "User postgres cannot reach $folder. Run:  chmod a+x on its parents, or choose another folder"
      exit 1
    fi
  }
else
  prepare_owner() { :; }
fi
owned_file() { # writes standard input to a file that only the owner of the cluster reads
  (umask 077 && cat >"$1")
  if [ "$(id -u)" = 0 ]; then chown postgres:postgres "$1"; fi
}

# --- what runs

# The pid in the file may be a zombie, or by now somebody else's: only a live server on our data folder counts.
server_runs() {
  local pid status
  pid=$(head -1 "$data/postmaster.pid" 2>/dev/null) || return 1
  [ -n "$pid" ] && [ -r "/proc/$pid/stat" ] || return 1
  status=$(sed 's/.*) //' "/proc/$pid/stat" 2>/dev/null | cut -c1) || return 1
  [ "$status" != Z ] && [ "$status" != X ] && tr '\0' ' ' <"/proc/$pid/cmdline" 2>/dev/null | grep -qF -- "$data "
}

port_is_free() { ! (exec 3<>"/dev/tcp/127.0.0.1/$1") 2>/dev/null; }

choose_port() {
  local wanted=${PALMETTE_PG_PORT:-} try
  if [ -z "$wanted" ] && [ -f "$folder/port" ]; then wanted=$(cat "$folder/port"); fi
  if [ -n "$wanted" ] && port_is_free "$wanted"; then port=$wanted; return; fi
  if [ -n "${PALMETTE_PG_PORT:-}" ]; then complain "Port $wanted is taken; looking for a free one."; fi
  for _ in $(seq 200); do
    # below the range from which the system takes ports for outgoing connections
    try=$((20000 + RANDOM % 12000))
    if port_is_free "$try"; then port=$try; return; fi
  done
  complain 'No free port found for PostgreSQL.'
  exit 1
}

answers() { as_owner "$bin/pg_isready" -q -h 127.0.0.1 -p "$1"; }

running_port() { sed -n 4p "$data/postmaster.pid"; }

sql() { PGPASSWORD=$(cat "$folder/password") "$bin/psql" -XAtq -h 127.0.0.1 -p "$port" -U palmette -v ON_ERROR_STOP=1 "$@"; }

make_cluster() {
  rm -rf "$folder/data.new"
  head -c 24 /dev/urandom | od -An -tx1 | tr -d ' \n' | owned_file "$folder/password"
  as_owner "$bin/initdb" -D "$folder/data.new" -U palmette --pwfile="$folder/password" -A scram-sha-256 -E UTF8 \
    --locale=C.UTF-8 --no-instructions ${PALMETTE_PG_FAST:+--no-sync} >"$folder/initdb.log" 2>&1 || {
    complain "initdb failed:"; cat "$folder/initdb.log" >&2; exit 1; }
  mv "$folder/data.new" "$data"
}

start_server() {
  local options
  # The pid there is dead, a zombie or somebody else's. With one that no process can have, PostgreSQL starts, and still
  # refuses while an orphan of the old server is attached to its memory.
  if [ -f "$data/postmaster.pid" ]; then as_owner sed -i '1s/.*/2147483646/' "$data/postmaster.pid"; fi
  choose_port
  options="-p $port -c listen_addresses=127.0.0.1 -c unix_socket_directories= -c max_connections=300"
  if [ -n "${PALMETTE_PG_FAST:-}" ]; then
    options+=' -c fsync=off -c full_page_writes=off'
  fi
  for _ in $(seq 10); do
    as_owner "$bin/pg_ctl" start -w -t 60 -s -D "$data" -l "$folder/log" -o "$options" >/dev/null 2>&1 9>&- && return
    grep -q 'pre-existing shared memory' <(tail -5 "$folder/log") || break
    sleep 1
  done
  complain "PostgreSQL did not start; the end of $folder/log:"
  tail -20 "$folder/log" >&2
  exit 1
}

exec 9>"$folder/lock"
flock 9

if [ "$command" = stop ]; then
  if newest_server && server_runs; then
    prepare_owner
    as_owner "$bin/pg_ctl" stop -s -m fast -w -t 60 -D "$data" 9>&-
  fi
  exit 0
fi

newest_server || install_server
newest_server || { complain 'PostgreSQL is not where its package puts it.'; exit 1; }
prepare_owner
[ -f "$data/PG_VERSION" ] || make_cluster
if server_runs; then
  port=$(running_port)
  for _ in $(seq 300); do answers "$port" && break; sleep 0.1; done
else
  start_server
fi
answers "$port" || { complain "PostgreSQL runs but does not answer on port $port; see $folder/log"; exit 1; }
printf '%s' "$port" >"$folder/port"
[ "$(sql -d postgres -c "select 1 from pg_database where datname = 'palmette'")" = 1 ] || sql -d postgres -c 'create database palmette'
printf 'postgres://palmette:%s@127.0.0.1:%s/palmette\n' "$(cat "$folder/password")" "$port"
