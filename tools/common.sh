# The Debian 12 packages of the project, in one place, and what both scripts do with them.
# Sourced by tools/quickstart and tools/check.

build_packages=(
  g++ cmake ninja-build git
  libsymspg-dev libeigen3-dev libboost-dev libfmt-dev libyaml-cpp-dev nlohmann-json3-dev
  gemmi-dev tao-pegtl-dev libcli11-dev libtbb-dev
)
check_packages=(
  googletest libgtest-dev libgmock-dev libbenchmark-dev
  clang-14 clang-tidy-14 clang-format-14 libclang-rt-14-dev
  python3 python3-periodictable gap-core
)

# install_packages NAME…: installs what is missing, asks nothing; root, or whoever may use sudo.
install_packages() {
  local missing=() package as_root=()
  for package in "$@"; do
    [ "$(dpkg-query -W -f '${db:Status-Status}' "$package" 2>/dev/null)" = installed ] ||
      missing+=("$package")
  done
  [ ${#missing[@]} -eq 0 ] && return 0
  if [ "$(id -u)" -ne 0 ]; then
    if ! sudo -n true 2>/dev/null; then
      echo "missing packages: ${missing[*]}" >&2
      echo "as root, run: apt-get install ${missing[*]}" >&2
      return 1
    fi
    as_root=(sudo -n)
  fi
  echo "installing ${missing[*]}"
  "${as_root[@]}" apt-get update -qq || echo "the package lists could not be renewed; going on" >&2
  "${as_root[@]}" env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq \
    --no-install-recommends "${missing[@]}" >/dev/null </dev/null
}


# configure DIRECTORY CMAKE-OPTION…: quiet unless it fails.
configure() {
  local directory=$1 log
  shift
  mkdir -p "$directory"
  log=$directory/configure.log
  cmake -S . -B "$directory" -G Ninja "$@" >"$log" 2>&1 || { cat "$log" >&2; return 1; }
}

# build DIRECTORY TARGET…: quiet unless it fails.
build() {
  local directory=$1 log
  shift
  log=$directory/build.log
  cmake --build "$directory" --target "$@" >"$log" 2>&1 </dev/null ||
    { grep -vE '^\[[0-9]+/[0-9]+\]' "$log" | tail -n 200 >&2; return 1; }
}
