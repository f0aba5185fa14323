# bentray: build, test and measure. DEVELOPERS.md says what each target holds.
GO ?= go
STATICCHECK = honnef.co/go/tools/cmd/staticcheck@v0.8.2
GOFUMPT = mvdan.cc/gofumpt@v0.12.0

# A columnar SQL engine from npm, for what only another program can prove.
ENGINE = bench-out/engine
ENGINE_PACKAGE = @duckdb/node-api@1.5.6-r.1

.PHONY: build test interop page-test lint bench bench-kernels fuzz demo clean

build:
	$(GO) build -o bin/bentray ./cmd/bentray

test:
	$(GO) test ./...

# Parquet files, read back by the engine; skipped where there is no npm.
interop:
	@if ! command -v node >/dev/null || ! command -v npm >/dev/null; then \
		echo "interop: skipped, node and npm are not installed"; \
	else \
		npm install --prefix $(ENGINE) --prefer-offline --no-audit --no-fund --ignore-scripts --loglevel error $(ENGINE_PACKAGE) && \
		BENTRAY_ENGINE="$(CURDIR)/$(ENGINE)" $(GO) test -count 1 -tags interop ./io/parquetfile/interop; \
	fi

# The page of diff in a headless Chromium: what it loads, says, draws and prints; skipped where there is none.
page-test:
	$(GO) test -count 1 -v -run TestBrowser -tags browser ./pipeline/quality/page

lint:
	$(GO) vet -tags interop,browser ./...
	$(GO) run $(STATICCHECK) ./...
	@unformatted=$$($(GO) run $(GOFUMPT) -l cmd pipeline correct io geo); \
	if [ -n "$$unformatted" ]; then echo "gofumpt would change:"; echo "$$unformatted"; exit 1; fi

# The whole program against the engine, 5 million points, in both formats.
bench:
	$(GO) run ./pipeline/benchmark -dir bench-out -format both

# The parts, each by itself.
bench-kernels:
	$(GO) test -run '^$$' -bench . -benchmem ./correct/... ./geo/... ./io/...

# Fuzzing is bounded by count, so that it ends.
FUZZ = -run '^$$' -fuzztime $(or $(FUZZTIME),20000x)
fuzz:
	$(GO) test $(FUZZ) -fuzz FuzzRewrite ./io/csvfile
	$(GO) test $(FUZZ) -fuzz FuzzPages ./io/parquetfile
	$(GO) test $(FUZZ) -fuzz FuzzFile ./io/parquetfile
	$(GO) test $(FUZZ) -fuzz FuzzParse ./pipeline/job
	$(GO) test $(FUZZ) -fuzz FuzzFromSettings ./pipeline/job
	$(GO) test $(FUZZ) -fuzz FuzzParsePolygons ./geo
	$(GO) test $(FUZZ) -fuzz FuzzParseZones ./geo
	$(GO) test $(FUZZ) -fuzz FuzzParseLine ./geo

demo:
	$(GO) run ./cmd/bentray demo demo-out

clean:
	rm -rf bin demo-out bench-out
