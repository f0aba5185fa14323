package geo

import (
	"slices"
	"testing"

	"github.com/paulmach/orb"
)

func TestParseLine(t *testing.T) {
	const line = `{"type":"LineString","coordinates":[[512000,7012000,4],[512100.5,7012050],[512200,7012000]]}`
	want := []orb.Point{{512000, 7012000}, {512100.5, 7012050}, {512200, 7012000}}
	for name, text := range map[string]string{
		"geometry": line, "feature": feature(line), "collection": collection(feature(line)), "byte order mark": "\ufeff" + line,
	} {
		got, err := ParseLine([]byte(text))
		if err != nil || !slices.Equal(got, want) {
			t.Errorf("%s: %v, %v, want %v", name, got, err, want)
		}
	}
}

func TestParseLineRefuses(t *testing.T) {
	line := func(positions string) string { return `{"type":"LineString","coordinates":` + positions + `}` }
	good := feature(line(`[[0,0],[1,1]]`))
	for _, tc := range []struct{ name, text, want string }{
		{"not JSON", `x,y`, `not GeoJSON: invalid character 'x' looking for beginning of value`},
		{"no line", collection(), `the FeatureCollection has 0 features, want one, with a LineString`},
		{"two lines", collection(good, good), `the FeatureCollection has 2 features, want one, with a LineString`},
		{"polygon", collection(feature(polygon(unitBox))), `geometry is a Polygon, want a LineString`},
		{"several parts", `{"type":"MultiLineString","coordinates":[[[0,0],[1,1]]]}`, `geometry is a MultiLineString, want a LineString`},
		{"line among features", collection(line(`[[0,0],[1,1]]`)), `feature 1: type is "LineString", want Feature`},
		{"feature in a feature", feature(good), `geometry is a Feature, want a LineString`},
		{"no geometry", feature(`null`), `no geometry, want a LineString`},
		{"geometry left out", `{"type":"Feature"}`, `no geometry, want a LineString`},
		{"no coordinates", `{"type":"LineString"}`, `no "coordinates"`},
		{"no positions", line(`[]`), `line has 0 positions, want at least 2`},
		{"one position", line(`[[1,2]]`), `line has 1 positions, want at least 2`},
		{"one place", line(`[[1,2],[1,2],[1,2]]`), `all 3 positions of the line are [1 2], want at least 2 different ones`},
		{"one number", line(`[[0,0],[1]]`), `position 2 of the coordinates has one number, want x and y`},
		{"null", line(`[[0,0],null]`), `coordinates hold null, want numbers`},
		{"too large", line(`[[0,0],[1e13,0]]`), `position 2 is [1e+13 0], want finite projected coordinates`},
	} {
		t.Run(tc.name, func(t *testing.T) {
			got, err := ParseLine([]byte(tc.text))
			if err == nil || err.Error() != tc.want {
				t.Errorf("got  %v\nwant %s", err, tc.want)
			}
			if got != nil {
				t.Errorf("%v beside the error, want nothing", got)
			}
		})
	}
}

// FuzzParseLine checks that any text gives either an error or a line of at least two
// finite positions.
func FuzzParseLine(f *testing.F) {
	for _, text := range []string{
		`{"type":"LineString","coordinates":[[0,0],[1,1,1]]}`, collection(feature(`{"type":"LineString","coordinates":[[1],[null]]}`)),
		feature(polygon(unitBox)), `{"type":"Feature","geometry":7}`, `{"type":"FeatureCollection"}`, `null`, ``,
	} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		line, err := ParseLine(data)
		if err != nil {
			return
		}
		for _, p := range line {
			if len(line) < 2 || !isFinite(p[0]) || !isFinite(p[1]) {
				t.Fatalf("line %v from %q", line, data)
			}
		}
	})
}
