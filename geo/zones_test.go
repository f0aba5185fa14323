package geo

import (
	"math"
	"slices"
	"testing"

	"github.com/paulmach/orb"
)

// zoneFeature is a feature with properties and a geometry, both as JSON.
func zoneFeature(properties, geometry string) string {
	return `{"type":"Feature","properties":` + properties + `,"geometry":` + geometry + `}`
}

// sameZone compares zones, where NaN is a value like others.
func sameZone(a, b Zone) bool {
	same := func(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) }
	return a.Name == b.Name && slices.EqualFunc(a.Polygons, b.Polygons, orb.Polygon.Equal) &&
		same(a.Temperature, b.Temperature) && same(a.Salinity, b.Salinity) && same(a.Level, b.Level)
}

func TestParseZones(t *testing.T) {
	unit, far := box(0, 0, 1, 1), orb.Ring{{512000, 7012000}, {512400, 7012000}, {512400, 7012300}, {512000, 7012000}}
	multi := `{"type":"MultiPolygon","coordinates":[[` + unitBox + `],[` + farBox + `]]}`
	none := math.NaN()
	brook := zoneFeature(`{"name":"Brook","temperature":9.5,"salinity":0,"level":-1e-1,"depth":[1],"Name":7}`, polygon(unitBox))
	for _, tc := range []struct {
		name, text string
		want       []Zone
	}{
		{"feature", brook, []Zone{{"Brook", []orb.Polygon{{unit}}, 9.5, 0, -0.1}}},
		{"byte order mark", "\ufeff" + brook, []Zone{{"Brook", []orb.Polygon{{unit}}, 9.5, 0, -0.1}}},
		{"null is absent", zoneFeature(`{"name":"Weir","temperature":null,"salinity":null,"level":0}`, polygon(farBox)), []Zone{{"Weir", []orb.Polygon{{far}}, none, none, 0}}},
		{"near names that are no slips", zoneFeature(`{"name":"Weir","names":1,"levee":"left","lever":null,"level":0}`, polygon(farBox)), []Zone{{"Weir", []orb.Polygon{{far}}, none, none, 0}}},
		{"a slip that is no number", zoneFeature(`{"name":"Weir","levee":"left","temperature":1,"salinity":2}`, polygon(farBox)), []Zone{{"Weir", []orb.Polygon{{far}}, 1, 2, none}}},
		{
			"collection", collection(brook, zoneFeature(`{"name":"brook ","temperature":4,"salinity":1}`, multi)),
			[]Zone{{"Brook", []orb.Polygon{{unit}}, 9.5, 0, -0.1}, {"brook ", []orb.Polygon{{unit}, {far}}, 4, 1, none}},
		},
	} {
		got, err := ParseZones([]byte(tc.text))
		if err != nil || !slices.EqualFunc(got, tc.want, sameZone) {
			t.Errorf("%s: %v, %v, want %v", tc.name, got, err, tc.want)
		}
	}
}

func TestParseZonesRefuses(t *testing.T) {
	zone := func(properties string) string { return zoneFeature(properties, polygon(unitBox)) }
	brook := zone(`{"name":"Brook","level":1}`)
	const names = `{"name":"Weir",`
	for _, tc := range []struct{ name, text, want string }{
		{"not JSON", `zones`, `not GeoJSON: invalid character 'z' looking for beginning of value`},
		{"other object", `{}`, `not GeoJSON: no "type", want a FeatureCollection, a Feature or a geometry`},
		{"bare geometry", polygon(unitBox), `the text is a Polygon, want a FeatureCollection or a Feature, whose properties are the zone's values`},
		{"no features", collection(), `no zones: the FeatureCollection has no features`},
		{"geometry among features", collection(brook, polygon(unitBox)), `feature 2: type is "Polygon", want Feature`},
		{"no properties", collection(brook, `{"type":"Feature","geometry":`+polygon(unitBox)+`}`), `feature 2: no name, want a text as property name`},
		{"null properties", zone(`null`), `no name, want a text as property name`},
		{"list of properties", zone(`[1]`), `properties are [1], want an object`},
		{"null name", zone(`{"name":null,"level":1}`), `no name, want a text as property name`},
		{"blank name", zone(`{"name":" ","level":1}`), `name is empty, want a text`},
		{"number for a name", zone(`{"name":7,"level":1}`), `name is 7, want a text`},
		{"name twice", collection(brook, zone(`{"name":"Weir","level":1}`), brook), `feature 3: name is "Brook", as is that of feature 1, want different names`},
		{"name in capitals", zone(`{"NAME":"Brook","level":1}`), `property is "NAME", want it in the letters "name"`},
		{"level in capitals", zone(names + `"Level":1,"temperature":3,"salinity":4}`), `property is "Level", want it in the letters "level"`},
		{"a letter left out", zone(names + `"temperature":17,"salinty":34}`), `property is "salinty"; did you mean "salinity"?`},
		{"a letter left out beside values", zone(names + `"Levl":1,"temperature":17,"salinity":34}`), `property is "Levl"; did you mean "level"?`},
		{"a letter too many", zone(names + `"levels":1}`), `property is "levels"; did you mean "level"?`},
		{"a wrong letter", zone(`{"namr":5,"level":1}`), `property is "namr"; did you mean "name"?`},
		{"letters exchanged", zone(names + `"tempreature":17,"salinity":34}`), `property is "tempreature"; did you mean "temperature"?`},
		{"another word", zone(names + `"label":1}`), `no values, want temperature and salinity, or level, or all three`},
		{"no values", collection(zone(names + `"depth":1}`)), `feature 1: no values, want temperature and salinity, or level, or all three`},
		{"no salinity", zone(names + `"temperature":1,"level":2}`), `temperature stands without salinity, want both or neither`},
		{"no temperature", zone(names + `"salinity":1}`), `salinity stands without temperature, want both or neither`},
		{"text for a temperature", zone(names + `"temperature":"17","salinity":1}`), `temperature is "17", want a number`},
		{"list for a salinity", zone(names + `"temperature":17,"salinity":[1]}`), `salinity is [1], want a number`},
		{"truth for a level", zone(names + `"level":true}`), `level is true, want a number`},
		{"level beyond a number", zone(names + `"level":1e999}`), `level is 1e999, want a number`},
		{"two texts for numbers", zone(names + `"level":"a","salinity":"b","temperature":"c"}`), `temperature is "c", want a number`},
		{"no geometry", collection(brook, zoneFeature(`{"name":"Weir","level":1}`, `null`)), `feature 2: no geometry, want a Polygon or MultiPolygon`},
		{"line", zoneFeature(`{"name":"Weir","level":1}`, `{"type":"LineString","coordinates":[[0,0],[1,1]]}`), `geometry is a LineString, want a Polygon or MultiPolygon`},
		{"open ring", zoneFeature(`{"name":"Weir","level":1}`, polygon(`[[0,0],[1,0],[1,1],[0,1]]`)), `ring 1: not closed: it starts at [0 0] and ends at [0 1], want the last position equal to the first`},
	} {
		t.Run(tc.name, func(t *testing.T) {
			zones, err := ParseZones([]byte(tc.text))
			if err == nil || err.Error() != tc.want {
				t.Errorf("got  %v\nwant %s", err, tc.want)
			}
			if zones != nil {
				t.Errorf("%v beside the error, want nothing", zones)
			}
		})
	}
}

// FuzzParseZones checks that any text gives either an error or zones as documented,
// whose overlaps are pairs of them.
func FuzzParseZones(f *testing.F) {
	brook := zoneFeature(`{"name":"Brook","level":1,"salinity":null}`, polygon(unitBox, `[[0,0],[9,0],[9,9],[0,0]]`))
	for _, text := range []string{
		brook, collection(brook, zoneFeature(`{"name":"Weir","temperature":1e3,"salinity":-1}`, polygon(unitBox))),
		zoneFeature(`{"name":"Weir","level":1}`, `{"type":"MultiPolygon","coordinates":[[`+unitBox+`],[`+farBox+`]]}`),
		collection(brook, zoneFeature(`{"name":"a","level":1}`, polygon(`[[0,0],[0,0],[0,0],[0,0]]`)), zoneFeature(`{"name":"b","level":1}`, polygon(`[[0,0],[1e-300,0],[0,1e12],[0,0]]`))),
		zoneFeature(`{"NAME":1}`, `null`), zoneFeature(`[]`, `[]`), `{"type":"Feature"}`, `null`, ``,
	} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		zones, err := ParseZones(data)
		if err != nil {
			return
		}
		names := map[string]bool{}
		for _, z := range zones {
			if names[z.Name] || z.Name == "" || len(z.Polygons) == 0 || z.checkValues() != nil {
				t.Fatalf("zone %+v from %q", z, data)
			}
			names[z.Name] = true
		}
		for _, pair := range Overlaps(zones) {
			if pair[0] < 0 || pair[0] >= pair[1] || pair[1] >= len(zones) {
				t.Fatalf("pair %v of %d zones", pair, len(zones))
			}
		}
	})
}
