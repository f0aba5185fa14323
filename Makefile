# bentray: build, test and measure. DEVELOPERS.md says what each target holds.
GO ?= go
STATICCHECK = honnef.co/go/tools/cmd/staticcheck@v0.8.2
GOFUMPT = mvdan.cc/gofumpt@v0.12.0

.PHONY: build test lint bench bench-kernels fuzz demo clean

build:
	$(GO) build -o bin/bentray ./cmd/bentray

test:
	$(GO) test ./...

lint:
	$(GO) vet ./...
	$(GO) run $(STATICCHECK) ./...
	@unformatted=$$($(GO) run $(GOFUMPT) -l cmd pipeline correct io geo); \
	if [ -n "$$unformatted" ]; then echo "gofumpt would change:"; echo "$$unformatted"; exit 1; fi

# The whole program against a columnar SQL engine, 5 million points.
bench:
	$(GO) run ./pipeline/benchmark -dir bench-out

# The parts, each by itself.
bench-kernels:
	$(GO) test -run '^$$' -bench . -benchmem ./correct/... ./geo/... ./io/...

# Fuzzing is bounded by count, so that it ends.
FUZZ = -run '^$$' -fuzztime $(or $(FUZZTIME),20000x)
fuzz:
	$(GO) test $(FUZZ) -fuzz FuzzRewrite ./io/csvfile
	$(GO) test $(FUZZ) -fuzz FuzzParse ./pipeline/job
	$(GO) test $(FUZZ) -fuzz FuzzParsePolygons ./geo

demo:
	$(GO) run ./cmd/bentray demo demo-out

clean:
	rm -rf bin demo-out bench-out
