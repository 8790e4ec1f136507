# The commands that README.md and DEVELOPERS.md speak of. Each fetches what it needs.

GO      ?= go
PYTHON  := /usr/bin/python3# Debian's, which has Debian's NumPy and SciPy
SUDO    := $(shell [ "$$(id -u)" = 0 ] || echo sudo)
ECHARTS := static/page/echarts.min.js

.PHONY: build soundcard demo test check tools references scenarios fuzz screenshots bench clean

build: $(ECHARTS)
	$(GO) build -o bin/shakerwatch ./cmd/shakerwatch

# The same with sound cards, which need a C library.
soundcard: $(ECHARTS) tools
	$(GO) build -tags soundcard -o bin/shakerwatch ./cmd/shakerwatch

demo: build
	bin/shakerwatch

test: tools check
	$(PYTHON) testdata/compare_references.py
	$(GO) test -race -shuffle=on ./...
	$(GO) test -race -shuffle=on -tags soundcard ./acquire/soundcard/...
	$(GO) test -tags soundcard -run Soundcard ./cmd/shakerwatch

# What a reader of the code would ask for first.
check: $(ECHARTS) tools
	@files=$$(gofmt -l acquire spectra estimate web static cmd); \
	if [ -n "$$files" ]; then echo "not formatted by gofmt: $$files"; exit 1; fi
	$(GO) vet ./...
	$(GO) vet -tags soundcard ./acquire/soundcard/... ./cmd/shakerwatch
	$(GO) mod tidy -diff
	$(GO) mod verify

# Debian packages that the tests need: a browser for the page, NumPy and SciPy for the references,
# PortAudio for sound cards, and a sound server that stands in for one; a C compiler and FFTW for the benchmark.
PACKAGES := chromium fonts-dejavu-core python3-numpy python3-scipy \
	portaudio19-dev pulseaudio pulseaudio-utils libasound2-plugins gcc libc6-dev libfftw3-dev libopenblas0-pthread
tools:
	@dpkg-query -W -f '$${db:Status-Status}\n' $(PACKAGES) 2>/dev/null | grep -cx installed | grep -qx $(words $(PACKAGES)) || { \
		$(SUDO) apt-get update -q && \
		$(SUDO) env DEBIAN_FRONTEND=noninteractive apt-get install -q -y --no-install-recommends $(PACKAGES); }

# The plotting library, at the version that the lock file names.
$(ECHARTS): static/package.json static/package-lock.json
	cd static && npm ci --no-audit --no-fund && npm run build
	@touch $@

references:
	$(PYTHON) testdata/make_references.py

# What breaks on rigs drawn at random, and how the watch names it: some ten minutes.
scenarios: $(ECHARTS)
	$(GO) run ./cmd/scenarios

# Every fuzz target for FUZZTIME each.
FUZZTIME ?= 60s
fuzz: $(ECHARTS)
	@$(GO) list ./... | while read -r pkg; do \
		$(GO) test -list '^Fuzz' $$pkg | grep '^Fuzz' | while read -r target; do \
			echo "$$pkg $$target"; \
			$(GO) test -run '^$$' -fuzz "^$$target$$" -fuzztime $(FUZZTIME) $$pkg || exit 1; \
		done || exit 1; \
	done

# The picture of README.md, made by the browser test.
screenshots: $(ECHARTS) tools
	@mkdir -p static/readme
	$(GO) test ./cmd/shakerwatch -count=1 -run TestDemoInABrowser -args -pictures $(CURDIR)/static/readme

# The whole job beside NumPy and C with FFTW, then the benchmarks of all rooms.
bench: $(ECHARTS) tools
	$(GO) run ./cmd/bench
	$(GO) test -run '^$$' -bench . -benchmem ./...

clean:
	rm -rf bin static/node_modules $(ECHARTS)
