package parquetfile

import (
	"fmt"
	"math"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

var rawNames = [3]string{"x_raw", "y_raw", "z_raw"}

// survey is a made-up cloud: x y z with nulls and NaN, a text, an integer and a
// column that cannot be read.
func survey(rows int) []built {
	c := []built{
		{name: "note", typ: parquet.Type_BYTE_ARRAY, encoding: parquet.Encoding_RLE_DICTIONARY, codec: parquet.CompressionCodec_GZIP},
		{name: "x", typ: parquet.Type_DOUBLE, encoding: parquet.Encoding_BYTE_STREAM_SPLIT, codec: parquet.CompressionCodec_ZSTD, pages: []int{100, 1000}},
		{name: "y", typ: parquet.Type_DOUBLE, required: true, encoding: parquet.Encoding_RLE_DICTIONARY, codec: parquet.CompressionCodec_SNAPPY},
		{name: "z", typ: parquet.Type_DOUBLE, version: 2, style: mixed},
		{name: "class", typ: parquet.Type_INT32, mark: converted(parquet.ConvertedType_UINT_8), encoding: parquet.Encoding_DELTA_BINARY_PACKED},
		{name: "price", typ: parquet.Type_INT32, mark: converted(parquet.ConvertedType_DECIMAL), required: true},
	}
	for i := range rows {
		c[0].values = append(c[0].values, fmt.Sprintf("note %d", i%9))
		c[1].values = append(c[1].values, 1000+float64(i)/3)
		c[2].values = append(c[2].values, 2000-float64(i%50))
		c[3].values = append(c[3].values, -float64(i%97)/8)
		c[4].values = append(c[4].values, int32(i%6))
		c[5].values = append(c[5].values, int32(i))
		switch {
		case i%13 == 5:
			c[3].values[i] = nil
		case i%17 == 3:
			c[3].values[i] = math.NaN()
		case i%19 == 0:
			c[1].values[i] = nil
		}
	}
	return c
}

// surveyLayout has three classes: 0 is moved, 1 and 2 are not.
func surveyLayout() cloud.Layout {
	return cloud.Layout{
		XYZ: [3]int{1, 2, 3}, RawNames: rawNames, Moved: []bool{true, false, false},
		Added: []cloud.Added{
			{Name: "depth"},
			{Name: "rays", Type: cloud.Count},
			{Name: "outcome", Type: cloud.Label, ByClass: []cloud.Value{{Set: true, Text: "corrected"}, {Set: true, Text: "dry"}, {}}},
			{Name: "n_water", ByClass: []cloud.Value{{Set: true, Number: 1.34}, {Set: true, Number: math.NaN()}, {}}},
			{Name: "views", Type: cloud.Count, ByClass: []cloud.Value{{Set: true, Number: 3}, {Set: true, Number: 3}, {Set: true, Number: 3}}},
			{Name: "nothing", Type: cloud.Label, ByClass: make([]cloud.Value, 3)},
		},
	}
}

// surveyClass and the functions below say what fillSurvey puts into row i. They
// read the row from y and x, which fillSurvey cannot know otherwise.
func surveyClass(z float64) uint8 {
	switch {
	case z != z:
		return 2
	case z > -2:
		return 1
	}
	return 0
}

func fillSurvey(c *cloud.Chunk) {
	x, y, z := c.Numbers[0], c.Numbers[1], c.Numbers[2]
	for i := range c.Rows {
		c.Class[i] = surveyClass(z[i])
		c.XYZ[0][i], c.XYZ[1][i], c.XYZ[2][i] = x[i]+1, y[i]+2, z[i]*1.25
		c.Added[0][i], c.Added[1][i] = math.NaN(), math.NaN()
		if c.Class[i] == 0 {
			c.Added[0][i], c.Added[1][i] = -z[i], 2000-y[i]
		}
	}
	for k := range c.Numbers {
		clear(c.Numbers[k]) // the caller may do as it likes with them
	}
}

// wantSurvey lists the expected output, column by column; nil is null.
func wantSurvey(in []built) map[string][]any {
	w := map[string][]any{"x_raw": in[1].values, "y_raw": in[2].values, "z_raw": in[3].values, "note": in[0].values, "class": in[4].values}
	for i := range in[0].values {
		x, y, z := in[1].values[i], in[2].values[i], in[3].values[i]
		class := uint8(2)
		if z != nil {
			class = surveyClass(z.(float64))
		}
		row := map[string]any{"x": x, "y": y, "z": z, "views": int32(3)}
		switch class {
		case 0:
			if x != nil {
				row["x"] = x.(float64) + 1
			}
			row["y"], row["z"] = y.(float64)+2, z.(float64)*1.25
			row["depth"], row["rays"] = -z.(float64), int32(2000-y.(float64))
			row["outcome"], row["n_water"] = "corrected", 1.34
		case 1:
			row["outcome"] = "dry"
		}
		for _, name := range []string{"x", "y", "z", "depth", "rays", "outcome", "n_water", "views", "nothing"} {
			w[name] = append(w[name], row[name])
		}
	}
	return w
}
