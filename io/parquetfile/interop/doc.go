// Package interop proves Parquet outputs with another program: a columnar SQL
// engine reads them back. Its test has the build tag interop and runs node:
//
//	npm install --prefix FOLDER @duckdb/node-api
//	BENTRAY_ENGINE=FOLDER go test -tags interop ./io/parquetfile/interop
package interop
