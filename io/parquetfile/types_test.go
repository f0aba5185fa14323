package parquetfile

import (
	"math"
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

func converted(c parquet.ConvertedType) func(*parquet.SchemaElement) {
	return func(e *parquet.SchemaElement) { e.ConvertedType = &c }
}

func logical(l *parquet.LogicalType) func(*parquet.SchemaElement) {
	return func(e *parquet.SchemaElement) { e.LogicalType = l }
}

func timestamp(u *parquet.TimeUnit, utc bool) func(*parquet.SchemaElement) {
	return logical(&parquet.LogicalType{TIMESTAMP: &parquet.TimestampType{Unit: u, IsAdjustedToUTC: utc}})
}

// TestNumbersOf reads one value of each type that stands for a number. The
// wanted numbers are written out; 2020-01-01 is 18262 days of 86400 s after
// 1970-01-01 (50 years of 365 days and 12 leap days).
func TestNumbersOf(t *testing.T) {
	const newYear2020 = 18262 * 86400
	i32, i64 := parquet.Type_INT32, parquet.Type_INT64
	cases := []struct {
		name     string
		typ      parquet.Type
		mark     func(*parquet.SchemaElement)
		value    any
		want     float64
		typeName string
	}{
		{"double, negative zero", parquet.Type_DOUBLE, nil, math.Copysign(0, -1), math.Copysign(0, -1), "DOUBLE"},
		{"double, infinite", parquet.Type_DOUBLE, nil, math.Inf(-1), math.Inf(-1), "DOUBLE"},
		{"float", parquet.Type_FLOAT, nil, float32(0.1), 0.100000001490116119384765625, "FLOAT"},
		{"int32", i32, nil, int32(math.MinInt32), -2147483648, "INT32"},
		{"unsigned 8 bits", i32, converted(parquet.ConvertedType_UINT_8), int32(200), 200, "INT32 UINT_8"},
		{"unsigned 32 bits", i32, converted(parquet.ConvertedType_UINT_32), int32(-1), 4294967295, "INT32 UINT_32"},
		{"unsigned 32 bits, logical", i32, logical(&parquet.LogicalType{INTEGER: &parquet.IntType{BitWidth: 32}}), int32(-2), 4294967294, "INT32 UINT_32"},
		{"signed 16 bits, logical", i32, logical(&parquet.LogicalType{INTEGER: &parquet.IntType{BitWidth: 16, IsSigned: true}}), int32(-7), -7, "INT32 INT_16"},
		{"int64, largest exact", i64, nil, int64(1<<53 - 1), 9007199254740991, "INT64"},
		{"unsigned 64 bits", i64, converted(parquet.ConvertedType_UINT_64), int64(-1), 18446744073709551615, "INT64 UINT_64"},
		{"milliseconds", i64, converted(parquet.ConvertedType_TIMESTAMP_MILLIS), int64(newYear2020*1000 + 250), newYear2020 + 0.25, "INT64 TIMESTAMP_MILLIS"},
		{"microseconds", i64, converted(parquet.ConvertedType_TIMESTAMP_MICROS), int64(newYear2020*1000000 + 125000), newYear2020 + 0.125, "INT64 TIMESTAMP_MICROS"},
		{"before 1970", i64, timestamp(&parquet.TimeUnit{MICROS: parquet.NewMicroSeconds()}, true), int64(-1500000), -1.5, "INT64 TIMESTAMP_MICROS"},
		{"of no time zone", i64, timestamp(&parquet.TimeUnit{MILLIS: parquet.NewMilliSeconds()}, false), int64(newYear2020 * 1000), newYear2020, "INT64 TIMESTAMP_MILLIS local"},
		{"nanoseconds beyond 2^53", i64, timestamp(&parquet.TimeUnit{NANOS: parquet.NewNanoSeconds()}, true), int64(newYear2020*1000000000 + 500000000), newYear2020 + 0.5, "INT64 TIMESTAMP_NANOS"},
		{"true", parquet.Type_BOOLEAN, nil, true, 1, "BOOLEAN"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			path := buildFile(t, []built{{name: "v", typ: c.typ, mark: c.mark, values: []any{c.value, nil}}}, []int{2}, nil)
			numbers, _, err := readAll(path, Options{}, cloud.Request{Numbers: []int{0}})
			if err != nil {
				t.Fatal(err)
			}
			if got := numbers[0][0]; !sameNumber(got, c.want) || !math.IsNaN(numbers[0][1]) {
				t.Errorf("got %v, want %v and NaN for null", numbers[0], c.want)
			}
			f, err := Open(path, Options{})
			if err != nil {
				t.Fatal(err)
			}
			defer f.Close()
			if got := f.Columns()[0]; got.Type != c.typeName || got.Name != "v" {
				t.Errorf("column is %v, want type %q", got, c.typeName)
			}
		})
	}
}

// TestNotReadable asks for columns that can only be copied.
func TestNotReadable(t *testing.T) {
	decimal := logical(&parquet.LogicalType{DECIMAL: &parquet.DecimalType{Precision: 9, Scale: 2}})
	lz4 := parquet.CompressionCodec_LZ4_RAW
	cases := []struct {
		name   string
		column built
		text   bool
		want   string
	}{
		{"decimal", built{typ: parquet.Type_INT32, mark: decimal, values: []any{int32(1)}}, false, `column "v" is INT32 DECIMAL(9,2), want a flat column of DOUBLE`},
		{"decimal, converted", built{typ: parquet.Type_INT32, mark: func(e *parquet.SchemaElement) {
			converted(parquet.ConvertedType_DECIMAL)(e)
			precision, scale := int32(9), int32(3)
			e.Precision, e.Scale = &precision, &scale
		}, values: []any{int32(1)}}, false, `column "v" is INT32 DECIMAL(9,3), want a flat column of DOUBLE`},
		{"date", built{typ: parquet.Type_INT32, mark: converted(parquet.ConvertedType_DATE), values: []any{int32(1)}}, false, `column "v" is INT32 DATE, want a flat`},
		{"96 bits", built{typ: parquet.Type_INT96, values: []any{nil}}, false, `column "v" is INT96, want a flat`},
		{"text as number", built{typ: parquet.Type_BYTE_ARRAY, values: []any{"1"}}, false, `column "v" is BYTE_ARRAY, want a number (DOUBLE`},
		{"number as text", built{typ: parquet.Type_INT64, values: []any{int64(1)}}, true, `column "v" is INT64, want a text (BYTE_ARRAY)`},
		{"codec", built{typ: parquet.Type_DOUBLE, codec: lz4, values: []any{1.0}}, false, `column "v", row group 1: is compressed with LZ4_RAW, want none, SNAPPY, GZIP or ZSTD`},
		{"encoding", built{typ: parquet.Type_DOUBLE, encoding: parquet.Encoding_DELTA_BINARY_PACKED, values: []any{1.0}}, false, `column "v", row group 1: DOUBLE values are encoded as DELTA_BINARY_PACKED, which cannot be read`},
		{"repeated", built{typ: parquet.Type_INT32, mark: func(e *parquet.SchemaElement) {
			r := parquet.FieldRepetitionType_REPEATED
			e.RepetitionType = &r
		}, values: []any{int32(1)}}, false, `column "v" is nested INT32, want a flat`},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			c.column.name = "v"
			path := buildFile(t, []built{c.column}, []int{1}, nil)
			read := cloud.Request{Numbers: []int{0}}
			if c.text {
				read = cloud.Request{Texts: []int{0}}
			}
			_, _, err := readAll(path, Options{}, read)
			if err == nil || !strings.Contains(err.Error(), c.want) || !strings.HasPrefix(err.Error(), path) {
				t.Errorf("got error %v, want %q with the file", err, c.want)
			}
		})
	}
}

// TestIsName tells names apart by their ending alone.
func TestIsName(t *testing.T) {
	for name, want := range map[string]bool{"a/b.parquet": true, "B.PARQUET": true, "parquet": false, "a.parquet.csv": false} {
		if IsName(name) != want {
			t.Errorf("IsName(%q) is %v, want %v", name, !want, want)
		}
	}
}
