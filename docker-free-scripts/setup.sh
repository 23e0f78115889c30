#!/usr/bin/env bash
# Sourced by start.sh and test.sh: Node packages and Debian's packages, only what is missing.

say() { printf '%s\n' "$*"; }

# ensure_debian COMMAND PACKAGE…: installs as root or with password-less sudo, else says what to run and exits 3.
ensure_debian() {
  local command=$1; shift
  command -v "$command" >/dev/null 2>&1 && return 0
  local as=
  if [ "$(id -u)" != 0 ]; then
    if sudo -n true 2>/dev/null; then as='sudo -n'; else
      say "Missing: $command. Run as root:  apt-get install $*" >&2
      exit 3
    fi
  fi
  say "Installing from Debian's packages: $*"
  $as apt-get update -qq >/dev/null || true
  DEBIAN_FRONTEND=noninteractive $as apt-get install -y -qq --no-install-recommends "$@" >/dev/null
}

# ensure_packages: npm ci when the lock file is newer than what is installed; two starts at once wait for each other.
ensure_packages() {
  mkdir -p .palmette
  exec 8>.palmette/packages.lock
  flock 8
  local want have=
  want=$(sha256sum package-lock.json | cut -d' ' -f1)
  [ -f node_modules/.palmette-lock ] && have=$(cat node_modules/.palmette-lock)
  if [ "$want" != "$have" ]; then
    say 'Installing Node packages'
    npm ci --silent
    printf '%s' "$want" > node_modules/.palmette-lock
  fi
  flock -u 8
  exec 8>&-
}
