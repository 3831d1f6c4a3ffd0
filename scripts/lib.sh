# Shared by the scripts beside it: where things are, headers with elapsed time, and the tools of the WebAssembly build.
# Sourced, never run.

root="$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd)"
began=$SECONDS

# Tools that the set-up had to bring itself live here; see scripts/setup.
tools="$root/target-tools"
PATH="$tools/node/bin:${CARGO_HOME:-$HOME/.cargo}/bin:$PATH"
export PATH

# The features that Chromium 109 and Firefox ESR 115 both know. The build uses these and the test command refuses others.
# (call-indirect-overlong is the encoding that reference-types brings with it.)
wasm_features=(
  --enable-mutable-globals --enable-sign-ext --enable-nontrapping-float-to-int
  --enable-bulk-memory --enable-bulk-memory-opt --enable-multivalue
  --enable-reference-types --enable-call-indirect-overlong --enable-simd
)

step() { printf '\n== %s  [%d s]\n' "$*" "$((SECONDS - began))"; }
say() { printf '   %s\n' "$*"; }
fail() { printf '\n%s\n' "$*" >&2; exit 1; }
have() { command -v "$1" >/dev/null 2>&1; }

# The version of a crate in Cargo.lock.
locked_version() { awk -v name="\"$1\"" '$1 == "name" && $3 == name { getline; gsub(/"/, "", $3); print $3 }' "$root/Cargo.lock"; }

newest_wasm_linker() { compgen -c wasm-ld | sort -V | tail -1; }

# Whether the source of the standard library lies beside a compiler: it is built for the page, for size.
has_library_source() { [[ -f "$("$1" --print sysroot)/lib/rustlib/src/rust/library/Cargo.lock" ]]; }

# Which of the two routes to a WebAssembly standard library is in place: "rustup", "debian" or nothing.
wasm_route() {
  local wanted="${BANDLEAF_WASM_ROUTE:-}"
  if [[ $wanted != debian ]] && have rustup && rustup target list --installed 2>/dev/null | grep -qx wasm32-unknown-unknown && has_library_source rustc; then
    echo rustup
  elif [[ $wanted != rustup && -x /usr/bin/cargo && -x /usr/bin/rustc && -n $(newest_wasm_linker) ]] && has_library_source /usr/bin/rustc; then
    echo debian
  fi
}

# Runs a command with the environment of the WebAssembly build. Paths are remapped so that no builder's path is in the file.
# The standard library is built along, for size: no words for a panic (a trap is one all the same, and the page says that
# the program stopped), no places in the source, no debug output. A third of the file.
with_wasm_toolchain() {
  local route sysroot registry flags home="${CARGO_HOME:-$HOME/.cargo}"
  route="$(wasm_route)"
  (
    export RUSTC_BOOTSTRAP=1 CARGO_UNSTABLE_BUILD_STD=std,panic_abort CARGO_UNSTABLE_BUILD_STD_FEATURES=optimize_for_size
    if [[ $route == debian ]]; then
      export PATH="/usr/bin:$PATH"
      CARGO_TARGET_WASM32_UNKNOWN_UNKNOWN_LINKER="$(newest_wasm_linker)"
      export CARGO_TARGET_WASM32_UNKNOWN_UNKNOWN_LINKER
    fi
    sysroot="$(rustc --print sysroot)"
    # Of several prefixes that match, the compiler takes the last.
    flags=(-Zunstable-options -Cpanic=immediate-abort -Zlocation-detail=none -Zfmt-debug=none
      "--remap-path-prefix=$root=/bandleaf" "--remap-path-prefix=$sysroot=/rust"
      "--remap-path-prefix=$home=/cargo")
    for registry in "$home"/registry/src/*; do flags+=("--remap-path-prefix=$registry=/crates"); done
    CARGO_ENCODED_RUSTFLAGS="$(printf '\037%s' "${flags[@]}")"
    CARGO_ENCODED_RUSTFLAGS="${CARGO_ENCODED_RUSTFLAGS#?}"
    export CARGO_ENCODED_RUSTFLAGS
    "$@"
  )
}

# Browsers for the tests; CHROMIUM and FIREFOX name others.
chromium_path() { [[ -n ${CHROMIUM:-} ]] && echo "$CHROMIUM" && return; for name in chromium chromium-browser google-chrome; do have "$name" && command -v "$name" && return; done; return 1; }
firefox_path() { [[ -n ${FIREFOX:-} ]] && echo "$FIREFOX" && return; for name in firefox-esr firefox; do have "$name" && command -v "$name" && return; done; return 1; }

# The release binary, wherever cargo was told to put it.
native_binary() { echo "${CARGO_TARGET_DIR:-$root/target}/release/bandleaf"; }
