#!/usr/bin/env bash
# Builds, serves and checks Brinkfield. Usage: ./build.sh serve | build | test | bench | answer | regenerate
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")"

say() { printf '%s\n' "$*"; }
step() { printf '\n== %s\n' "$*"; }
fail() { printf 'build.sh: %s\n' "$*" >&2; exit 1; }

usage() {
	cat <<'TEXT'
./build.sh serve        build, print the worked case's findings, serve the page on this machine
./build.sh build        write site/dist/ (for any static host) and site/dist/brinkfield.html (one file)
./build.sh test         everything CI checks: format, vet, generated files, tests native, in WebAssembly, in a browser
./build.sh bench        how fast it is: native, in WebAssembly, edit to redraw in the page
./build.sh answer …     a link or parameters (and a file of spectra) in, the page's numbers as JSON out
./build.sh regenerate   write the generated files anew
TEXT
}

# --- what is needed ---------------------------------------------------------

need_go() {
	command -v go >/dev/null || fail "Go is missing; get Go 1.26 or newer from go.dev/dl and put it on the PATH"
	local have want
	have=$(GOTOOLCHAIN=local go env GOVERSION | sed 's/^go//')
	want=$(awk '$1 == "go" {print $2}' go.mod)
	[[ "$(printf '%s\n%s\n' "$want" "$have" | sort -V | head -n1)" == "$want" ]] ||
		fail "Go is too old ($have), expected $want or newer from go.dev/dl"
}

# debian PACKAGE… installs from Debian's packages where that is possible.
debian() {
	if [[ $(id -u) == 0 ]] && command -v apt-get >/dev/null; then
		say "installing $* from Debian's packages"
		export DEBIAN_FRONTEND=noninteractive
		apt-get update -qq
		apt-get install -y -qq --no-install-recommends "$@" >/dev/null
	else
		fail "$* is missing; as root on Debian: apt-get install $*"
	fi
}

need_node() {
	if ! command -v node >/dev/null || ! command -v npm >/dev/null; then debian nodejs npm; fi
	local major
	major=$(node -p 'process.versions.node.split(".")[0]')
	((major >= 18)) || fail "Node is too old ($(node --version)), expected 18 or newer"
	if [[ ! -e site/node_modules/.package-lock.json || site/package-lock.json -nt site/node_modules/.package-lock.json ]]; then
		say "fetching the plots' library"
		(cd site && npm ci --no-audit --no-fund --loglevel=error)
		touch site/node_modules/.package-lock.json
	fi
}

chromium_path() { command -v chromium || command -v chromium-browser || command -v google-chrome || true; }

need_chromium() {
	if [[ -z $(chromium_path) ]]; then debian chromium fonts-dejavu-core; fi
	[[ -n $(chromium_path) ]] || fail "no Chromium found; install Debian's package chromium"
}

# --- commands ---------------------------------------------------------------

# compile PACKAGE FILE makes a WebAssembly program. Inlining is off where speed is
# not needed, which saves a tenth of what travels; the physics keeps it.
compile() {
	local package lean=()
	for package in brinkfield/wasm/... brinkfield/physics/study gonum.org/v1/gonum/lapack/... github.com/vugu/... \
		encoding/json fmt reflect regexp/... time net/url net/netip log html compress/flate; do
		lean+=("-gcflags=$package=-l")
	done
	GOOS=js GOARCH=wasm go build -trimpath -ldflags='-s -w' "${lean[@]}" -o "$2" "$1"
}

build() {
	need_go
	need_node
	mkdir -p .build
	compile ./wasm .build/brinkfield.wasm
	go run ./site/tools/pack -program .build/brinkfield.wasm -site site -out site/dist
}

answer() {
	need_go
	mkdir -p .build
	go build -o .build/answer ./wasm/answer
	.build/answer "$@"
}

serve() {
	build
	say ""
	answer --findings
	say ""
	go build -o .build/serve ./site/tools/serve
	exec .build/serve -dir site/dist
}

# regenerate_in DIR writes the generated files of a copy of the sources.
regenerate_in() {
	local root=$1
	local folder
	for folder in wasm/page site/browsertest/faulty; do
		go tool vugugen -skip-go-mod -skip-main "$root/$folder"
		gofmt -w "$root/$folder"/*_gen.go
	done
	(cd "$root" && go generate ./...)
}

regenerate() {
	need_go
	regenerate_in .
}

# check_generated compares the committed generated files with new ones.
check_generated() {
	local copy
	copy=$(mktemp -d)
	mkdir -p "$copy/site"
	cp -r go.mod go.sum physics wasm testdata "$copy/"
	cp -r site/tools site/browsertest "$copy/site/"
	regenerate_in "$copy"
	diff -r physics "$copy/physics" && diff -r wasm "$copy/wasm" && diff -r testdata "$copy/testdata" &&
		diff -r site/browsertest "$copy/site/browsertest" ||
		fail "generated files are not up to date (see above); run ./build.sh regenerate and commit"
	rm -rf "$copy"
}

check_format() {
	local bad
	bad=$(gofmt -l physics wasm site/tools site/browsertest)
	[[ -z $bad ]] || fail "not formatted by gofmt: $bad"
	go vet ./...
	GOOS=js GOARCH=wasm go vet ./physics/... ./wasm/...
}

# wasm_go runs Go for WebAssembly with few variables: the many of a CI machine
# overflow what a program gets from Go's support script.
wasm_go() {
	local keep=() name value
	while IFS='=' read -r -d '' name value; do
		case $name in GO* | PATH | HOME | TMPDIR | XDG_CACHE_HOME) keep+=("$name=$value") ;; esac
	done < <(env -0)
	env -i "${keep[@]}" GOOS=js GOARCH=wasm go "$@"
}

wasm_exec() { printf '%s/lib/wasm/go_js_wasm_exec' "$(go env GOROOT)"; }

# The tests of the core where the page runs it.
test_wasm() {
	local packages
	mapfile -t packages < <(go list ./physics/... ./wasm/engine)
	wasm_go test -short -exec="$(wasm_exec)" "${packages[@]}"
}

# pack_faulty builds the page of mistakes that the browser tests break on purpose.
pack_faulty() {
	compile ./site/browsertest/faulty .build/faulty.wasm
	go run ./site/tools/pack -program .build/faulty.wasm -site site -out .build/faulty >/dev/null
}

test_browser() {
	need_chromium
	pack_faulty
	BRINKFIELD_FAULTY="$PWD/.build/faulty" BRINKFIELD_DIST="$PWD/site/dist" CHROMIUM="$(chromium_path)" \
		go test -count=1 -timeout 10m "$@" ./site/browsertest
}

test_all() {
	need_go
	need_node
	step "format, vet"; check_format
	step "generated files"; check_generated
	step "tests, native"; go test ./...
	step "tests of the plots"; (cd site && node --test plots/*.test.mjs)
	step "tests, WebAssembly"; test_wasm
	step "build"; build
	step "tests, browser"; test_browser
	step "all good"
}

bench() {
	need_go
	need_node
	step "native"; go test -run '^$' -bench . -benchmem ./physics/... ./wasm/...
	step "WebAssembly"
	wasm_go test -run '^$' -bench . -exec="$(wasm_exec)" ./physics/...
	step "page"; build; test_browser -run '^$' -bench . -benchtime 20x
}

case "${1:-}" in
build | serve | bench | regenerate) "$1" ;;
test) test_all ;;
answer) shift; answer "$@" ;;
help | -h | --help) usage ;;
*) usage >&2; exit 2 ;;
esac
