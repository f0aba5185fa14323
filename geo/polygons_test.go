package geo

import (
	"encoding/json"
	"slices"
	"strings"
	"testing"

	"github.com/paulmach/orb"
)

const (
	unitBox = `[[0,0],[1,0],[1,1],[0,1],[0,0]]`
	farBox  = `[[512000,7012000],[512400,7012000],[512400,7012300],[512000,7012000]]`
)

// feature wraps a geometry.
func feature(geometry string) string {
	return `{"type":"Feature","properties":{"name":"Lantern Cove","list":[1]},"geometry":` + geometry + `}`
}

// polygon wraps rings.
func polygon(rings ...string) string {
	return `{"type":"Polygon","coordinates":[` + strings.Join(rings, ",") + `]}`
}

// collection wraps features.
func collection(features ...string) string {
	return `{"type":"FeatureCollection","name":"water","features":[` + strings.Join(features, ",") + `]}`
}

func TestParsePolygons(t *testing.T) {
	unit, far := box(0, 0, 1, 1), orb.Ring{{512000, 7012000}, {512400, 7012000}, {512400, 7012300}, {512000, 7012000}}
	multi := `{"type":"MultiPolygon","coordinates":[[` + unitBox + `],[` + farBox + `]]}`
	for _, tc := range []struct {
		name, text string
		want       []orb.Polygon
	}{
		{"bare polygon", polygon(unitBox), []orb.Polygon{{unit}}},
		{"bare multipolygon", multi, []orb.Polygon{{unit}, {far}}},
		{"feature", feature(polygon(farBox)), []orb.Polygon{{far}}},
		{"collection", collection(feature(polygon(farBox)), feature(multi)), []orb.Polygon{{far}, {unit}, {far}}},
		{"hole", polygon(`[[-1,-1],[3,-1],[3,3],[-1,3],[-1,-1]]`, unitBox), []orb.Polygon{{box(-1, -1, 3, 3), unit}}},
		{"heights and a byte order mark", "\ufeff" + polygon(`[[0,0,5],[1,0,5],[1,1,6],[0,1,6],[0,0,5]]`), []orb.Polygon{{unit}}},
		{"exponents and blanks", polygon("[ [ 0 , 0e0 ],\n[1,0],[1.0,1],[0,10e-1],[0,-0] ]"), []orb.Polygon{{unit}}},
	} {
		got, err := ParsePolygons([]byte(tc.text))
		if err != nil || !slices.EqualFunc(got, tc.want, orb.Polygon.Equal) {
			t.Errorf("%s: %v, %v, want %v", tc.name, got, err, tc.want)
		}
	}
}

func TestParsePolygonsRefuses(t *testing.T) {
	good := feature(polygon(unitBox))
	for _, tc := range []struct {
		name, text string
		want       []string
	}{
		{"empty", ``, []string{"not GeoJSON"}},
		{"csv", "x,y\n1,2\n", []string{"not GeoJSON"}},
		{"cut off", good[:len(good)-9], []string{"not GeoJSON"}},
		{"array", `[1,2]`, []string{"not GeoJSON"}},
		{"other object", `{"a":1}`, []string{"not GeoJSON", `"type"`, "FeatureCollection"}},
		{"other type", `{"type":"Topology"}`, []string{"Topology", "Polygon or MultiPolygon"}},
		{"no features", collection(), []string{"no polygons"}},
		{"empty multipolygon", `{"type":"MultiPolygon","coordinates":[]}`, []string{"MultiPolygon is empty"}},
		{"line", collection(good, feature(`{"type":"LineString","coordinates":[[0,0],[1,1]]}`)), []string{"feature 2", "LineString", "Polygon"}},
		{"bare point", `{"type":"Point","coordinates":[0,0]}`, []string{"Point", "Polygon"}},
		{"geometry collection", feature(`{"type":"GeometryCollection","geometries":[null]}`), []string{"GeometryCollection"}},
		{"geometry in a collection", collection(good, good, polygon(unitBox)), []string{"feature 3", `"Polygon"`, "Feature"}},
		{"no geometry", collection(good, `{"type":"Feature"}`), []string{"feature 2", "no geometry"}},
		{"null geometry", feature(`null`), []string{"no geometry"}},
		{"geometry is a number", feature(`7`), []string{"not GeoJSON"}},
		{"flat multipolygon", `{"type":"MultiPolygon","coordinates":[[0,0]]}`, []string{"coordinates"}},
		{"null feature", collection(`null`), []string{"feature 1"}},
		{"no coordinates", `{"type":"Polygon"}`, []string{"coordinates"}},
		{"empty polygon", polygon(), []string{"empty"}},
		{"short ring", polygon(`[[0,0],[1,0],[0,0]]`), []string{"ring 1", "3 positions", "at least 4"}},
		{"empty ring", polygon(unitBox, `[]`), []string{"ring 2", "0 positions"}},
		{"open ring", collection(good, feature(polygon(unitBox, `[[0,0],[1,0],[1,1],[0,1]]`))), []string{"feature 2", "ring 2", "not closed"}},
		{"one number", polygon(`[[0,0],[1,0],[1],[0,1],[0,0]]`), []string{"position 3", "one number"}},
		{"null number", polygon(`[[0,0],[1,null],[1,1],[0,0]]`), []string{"null"}},
		{"null ring", polygon(`null`), []string{"null"}},
		{"text", polygon(`[["0",0],[1,0],[1,1],[0,0]]`), []string{"coordinates", "string"}},
		{"flat", polygon(`[0,0]`), []string{"coordinates"}},
		{"too large for a number", polygon(`[[0,0],[1e999,0],[1,1],[0,0]]`), []string{"1e999"}},
		{"too large", polygon(`[[0,0],[1,0],[1,-1e13],[0,0]]`), []string{"position 3", "finite"}},
		{"bow tie", collection(good, feature(polygon(unitBox, `[[0,0],[2,2],[2,0],[0,2],[0,0]]`))), []string{"feature 2", "ring 2", "edges 1 and 3", "1.000 1.000"}},
		{"part of a multipolygon", `{"type":"MultiPolygon","coordinates":[[` + unitBox + `],[[[0,0],[2,2],[2,0],[0,2],[0,0]]]]}`, []string{"polygon 2", "ring 1", "cross"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			polys, err := ParsePolygons([]byte(tc.text))
			wantError(t, err, tc.want...)
			if polys != nil {
				t.Errorf("%v beside the error, want nothing", polys)
			}
		})
	}
}

// FuzzParsePolygons checks that any text gives either an error or polygons that read
// the same when written again, and that an index of them answers.
func FuzzParsePolygons(f *testing.F) {
	for _, text := range []string{
		polygon(unitBox), feature(polygon(farBox, unitBox)), collection(feature(polygon(unitBox)), feature(polygon(farBox))),
		`{"type":"MultiPolygon","coordinates":[[` + unitBox + `],[` + farBox + `]]}`,
		polygon(`[[0,0],[2,2],[2,0],[0,2],[0,0]]`), polygon(`[[0,0],[0,0],[0,0],[0,0]]`), polygon(`[[0,0],[1e-300,0],[0,1e12],[0,0]]`),
		feature(`{"type":"GeometryCollection","geometries":[null]}`), `{"type":"Polygon","coordinates":[[[1],[null]]]}`, `null`, ``,
	} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		polys, err := ParsePolygons(data)
		if err != nil {
			return
		}
		text, err := json.Marshal(map[string]any{"type": "MultiPolygon", "coordinates": polys})
		if err != nil {
			t.Fatal(err)
		}
		again, err := ParsePolygons(text)
		if err != nil || len(polys) == 0 || !slices.EqualFunc(again, polys, orb.Polygon.Equal) {
			t.Fatalf("%v from %q, then %v, %v", polys, data, again, err)
		}
		idx := NewPolygonIndex(polys)
		for _, poly := range polys {
			p := poly.Bound().Center()
			found := [1]int32{}
			idx.Find(found[:], p[:1], p[1:])
			if k := found[0]; k < -1 || int(k) >= len(polys) {
				t.Fatalf("found polygon %d of %d", k, len(polys))
			}
		}
	})
}
