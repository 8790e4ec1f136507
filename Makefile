# The commands that README.md and DEVELOPERS.md speak of. Each fetches what it needs.

GO      ?= go
PYTHON  := /usr/bin/python3# Debian's, which has Debian's NumPy and SciPy
SUDO    := $(shell [ "$$(id -u)" = 0 ] || echo sudo)
ECHARTS := static/page/echarts.min.js

.PHONY: build demo test check tools references fuzz screenshots bench clean

build: $(ECHARTS)
	$(GO) build -o bin/shakerwatch ./cmd/shakerwatch

demo: build
	bin/shakerwatch

test: $(ECHARTS) tools check
	$(PYTHON) testdata/compare_references.py
	$(GO) test -race -shuffle=on ./...

# What a reader of the code would ask for first.
check: $(ECHARTS)
	@files=$$(gofmt -l acquire spectra estimate web static cmd); \
	if [ -n "$$files" ]; then echo "not formatted by gofmt: $$files"; exit 1; fi
	$(GO) vet ./...
	$(GO) mod tidy -diff
	$(GO) mod verify

# Debian packages that the tests need: a browser for the page, NumPy and SciPy for the references.
tools:
	@command -v chromium >/dev/null && $(PYTHON) -c 'import numpy, scipy' 2>/dev/null || { \
		$(SUDO) apt-get update -q && \
		$(SUDO) env DEBIAN_FRONTEND=noninteractive apt-get install -q -y --no-install-recommends \
			chromium fonts-dejavu-core python3-numpy python3-scipy; }

# The plotting library, at the version that the lock file names.
$(ECHARTS): static/package.json static/package-lock.json
	cd static && npm ci --no-audit --no-fund && npm run build
	@touch $@

references:
	$(PYTHON) testdata/make_references.py

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

bench: $(ECHARTS)
	$(GO) test -run '^$$' -bench . -benchmem ./...

clean:
	rm -rf bin static/node_modules $(ECHARTS)
