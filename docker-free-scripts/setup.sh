# Sourced by the two commands: what must be there before Node can take over. POSIX shell.

fail() {
  printf '%s\n' "$1" >&2
  exit 1
}

# Node 20.19 or newer, for its module loading.
need_node() {
  command -v node >/dev/null 2>&1 || fail "Tenderlight needs Node.js 20.19 or newer; install Debian's nodejs or a newer Node, then try again."
  node -e 'const [a, b] = process.versions.node.split(".").map(Number); process.exit(a > 20 || (a === 20 && b >= 19) ? 0 : 1)' ||
    fail "Tenderlight needs Node.js 20.19 or newer; this is $(node --version)."
}

# npm packages, only when the lock has changed since they were installed.
need_packages() {
  mkdir -p .data
  lock=$(sha256sum package-lock.json | cut -d' ' -f1)
  if [ ! -d node_modules ] || [ "$(cat .data/lock.sha256 2>/dev/null || true)" != "$lock" ]; then
    printf 'Installing npm packages…\n'
    npm ci --no-audit --no-fund --loglevel=error || fail "The npm packages could not be installed. Is the registry reachable? Run npm ci to see why."
    printf '%s' "$lock" >.data/lock.sha256
  fi
}

# need_debian PROGRAM PACKAGE… : installs Debian's packages when a program is missing.
need_debian() {
  program=$1
  shift
  if command -v "$program" >/dev/null 2>&1 || [ -x "/usr/sbin/$program" ]; then
    return 0
  fi
  if [ "$(id -u)" = 0 ]; then
    as_root=""
  elif command -v sudo >/dev/null 2>&1 && sudo -n true 2>/dev/null; then
    as_root="sudo -n"
  else
    fail "$program is missing and cannot be installed without root. Run once: sudo apt-get install $*"
  fi
  printf 'Installing %s…\n' "$*"
  $as_root apt-get update -qq >/dev/null 2>&1 || true
  DEBIAN_FRONTEND=noninteractive $as_root apt-get install -y -qq --no-install-recommends "$@" >/dev/null ||
    fail "Debian's packages $* could not be installed. Run: apt-get install $*"
}
