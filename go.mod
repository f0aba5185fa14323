module bentray

go 1.26.0

require (
	github.com/alecthomas/kong v1.17.0
	github.com/apache/thrift v0.25.0
	github.com/bmatcuk/doublestar/v4 v4.10.4
	github.com/gofrs/flock v0.13.2
	github.com/klauspost/compress v1.20.4
	github.com/paulmach/orb v0.14.0
	github.com/pelletier/go-toml/v2 v2.4.3
	github.com/rogpeppe/go-internal v1.16.0
	github.com/schollz/progressbar/v3 v3.19.1
	github.com/xitongsys/parquet-go v1.6.2
	golang.org/x/sync v0.25.0
	golang.org/x/sys v0.50.0
	golang.org/x/term v0.45.0
	gonum.org/v1/gonum v0.17.0
)

require (
	github.com/mitchellh/colorstring v0.0.0-20190213212951-d06e56a500db // indirect
	github.com/rivo/uniseg v0.4.7 // indirect
	golang.org/x/tools v0.30.0 // indirect
)
