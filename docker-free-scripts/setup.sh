# Sourced by the commands: what must be there before Node can take over. POSIX shell.

fail() {
  printf '%s\n' "$1" >&2
  exit 1
}

# Node 20.19 or newer, for its module loading.
need_node() {
  command -v node >/dev/null 2>&1 || fail "Tenderlight needs Node.js 20.19 or newer. Install it, then try again."
  node -e 'const [a, b] = process.versions.node.split(".").map(Number); process.exit(a > 20 || (a === 20 && b >= 19) ? 0 : 1)' ||
    fail "Tenderlight needs Node.js 20.19 or newer; this is $(node --version)."
}

# The folder of everything that is made here and not committed; other users of the machine may not look in.
need_data_folder() {
  mkdir -p .data 2>/dev/null && [ -w .data ] ||
    fail "The folder $(pwd)/.data cannot be written. Start as the user it belongs to, or remove it to begin anew."
  [ ! -O .data ] || chmod 700 .data
}

# npm packages, only when the lock has changed since they were installed; two commands at once take turns.
need_packages() {
  (
    flock 8
    lock=$(sha256sum package-lock.json | cut -d' ' -f1)
    installed=node_modules/.tenderlight-lock
    if [ "$(cat $installed 2>/dev/null || true)" != "$lock" ]; then
      printf 'Installing npm packages…\n'
      npm ci --no-audit --no-fund --loglevel=error 8>&- ||
        fail "The npm packages could not be installed. Is the registry reachable? Run npm ci to see why."
      printf '%s' "$lock" >$installed
    fi
  ) 8>.data/install.lock
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
    fail "$program is missing, and installing it needs root. Run once: sudo apt-get install $*"
  fi
  printf 'Installing %s…\n' "$*"
  $as_root apt-get update -qq >/dev/null 2>&1 || true
  $as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends "$@" >/dev/null ||
    fail "Debian's packages $* could not be installed. Run: apt-get install $*"
}

need_mariadb() {
  need_debian mariadbd mariadb-server-core mariadb-client-core
  need_debian mariadb mariadb-client-core
}
