package parquetfile

import (
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// TestCoarse refuses FLOAT coordinates by their step: a float32 has 24 bits, so
// from 8192 to 16384 its step is 2^-10 (0.98 mm) and above that 2^-9 (1.95 mm).
func TestCoarse(t *testing.T) {
	cases := []struct {
		name   string
		x      float32
		o      Options
		refuse bool
	}{
		{"0.98 mm", -16383, Options{}, false},
		{"1.95 mm", -16384, Options{}, true},
		{"1.95 mm, accepted", -16384, Options{Coarse: true}, false},
		{"0.98 thousandths of a foot", 16383, Options{Unit: 0.3048}, false},
		{"1.95 thousandths of a foot", 16384, Options{Unit: 0.3048}, false},
		{"3.9 thousandths of a foot", 32768, Options{Unit: 0.3048}, true},
	}
	for _, c := range cases {
		for _, withStats := range []bool{false, true} {
			t.Run(c.name, func(t *testing.T) {
				columns := survey(2)
				columns[1] = built{name: "x", typ: parquet.Type_FLOAT, values: []any{float32(1), c.x}}
				if withStats {
					b := plainBytes([]any{c.x})
					columns[1].stats = &parquet.Statistics{MinValue: b, MaxValue: b}
				}
				path := buildFile(t, columns, []int{2}, nil)
				_, err := rewrite(path, c.o, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), 1, fillSurvey)
				if (err != nil) != c.refuse {
					t.Errorf("got error %v, want one: %v", err, c.refuse)
				}
				if err != nil && !strings.Contains(err.Error(), `column "x" is FLOAT, whose step at`) {
					t.Errorf("error is %v, want the column and its step", err)
				}
			})
		}
	}
}

// TestNoCoordinates refuses x, y and z of a type that cannot be a length.
func TestNoCoordinates(t *testing.T) {
	for _, c := range []built{
		{typ: parquet.Type_BOOLEAN, values: []any{true, false}},
		{typ: parquet.Type_INT64, mark: converted(parquet.ConvertedType_TIMESTAMP_MILLIS), values: []any{int64(1), int64(2)}},
	} {
		c.name = "y"
		columns := survey(2)
		columns[2] = c
		path := buildFile(t, columns, []int{2}, nil)
		_, err := rewrite(path, Options{}, cloud.Request{}, surveyLayout(), 1, fillSurvey)
		if err == nil || !strings.Contains(err.Error(), `column "y" is `) || !strings.Contains(err.Error(), "want a coordinate (DOUBLE, FLOAT, INT32 or INT64)") {
			t.Errorf("got error %v, want the column and its type refused", err)
		}
	}
}
