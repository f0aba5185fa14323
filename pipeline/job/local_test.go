package job

import (
	"reflect"
	"strings"
	"testing"
)

// withSurface is the shortest job with another surface.
func withSurface(text string) string {
	return strings.Replace(least, "surface.level = 0.42", text, 1)
}

// withWater is the shortest job with another water.
func withWater(text string) string {
	return strings.Replace(least, "{ temperature = 12, salinity = 0 }", "{ "+text+" }", 1)
}

// withSensors is the shortest job with sensors in place of rays.
func withSensors(text string) string {
	return strings.Replace(least, "rays.model = \"vertical\"\n", "", 1) + text
}

func TestParseLocalAccepts(t *testing.T) {
	for _, c := range []struct {
		name, text string
		got        func(*Job) any
		want       any
	}{
		{"plane is level unless it slopes", withSurface("surface.plane = { level = 1, at = [2, 3] }"), func(j *Job) any { return *j.Surface.Plane }, Plane{Level: ptr(1.0), At: &[2]float64{2, 3}, SlopeX: ptr(0.0), SlopeY: ptr(0.0)}},
		{"waterline", withSurface("surface.plane.waterline = 'w.csv'"), func(j *Job) any { return *j.Surface.Plane }, Plane{Waterline: "w.csv"}},
		{"grid of points", withSurface("surface.grid.points = 'p.csv'"), func(j *Job) any { return *j.Surface.Grid }, Grid{Points: "p.csv", Reach: 5, Window: 2}},
		{"grid of classes", withSurface("surface.grid = { classes = [42, 41, 41], cell = 3, reach = 0.5, window = 1, offset = 0.1 }"), func(j *Job) any { return *j.Surface.Grid }, Grid{Classes: []int{41, 42}, Cell: ptr(3.0), Reach: 0.5, Window: 1, Offset: 0.1}},
		{"lowest and highest class", withSurface("surface.grid.classes = [0, 255]"), func(j *Job) any { return j.Surface.Grid.Classes }, []int{0, 255}},
		{"gauge alone", withSurface("surface.gauge.file = 'g.csv'"), func(j *Job) any { return j.Surface }, Surface{Gauge: &Gauge{File: "g.csv", MaxGap: 3600}}},
		{"gauge on a level", least + "surface.gauge.file = 'g.csv'", func(j *Job) any { return j.Surface }, Surface{Level: ptr(0.42), Gauge: &Gauge{File: "g.csv", MaxGap: 3600}}},
		{"time as a number", withSurface("surface.gauge = { file = 'g.csv', at = 1934184600 }"), func(j *Job) any { return *j.Surface.Gauge.At }, 1934184600.0},
		{"time as text", withSurface("surface.gauge = { file = 'g.csv', at = '2031-04-17T05:00:00.25-04:30' }"), func(j *Job) any { return *j.Surface.Gauge.At }, 1934184600.25},
		{"time before 1970", withSurface("surface.gauge = { file = 'g.csv', at = 1969-12-31T23:59:59.5Z }"), func(j *Job) any { return *j.Surface.Gauge.At }, -0.5},
		{"zones alone", "water.zones = 'z.geojson'\n" + strings.Replace(withSurface(""), "water = { temperature = 12, salinity = 0 }", "", 1), func(j *Job) any { return j.Surface }, Surface{}},
		{"stations alone", withWater("stations = 's.csv'"), func(j *Job) any { return j.Water }, Water{Formula: "quan-fry", Stations: "s.csv", MaxGap: 3600}},
		{"constants beside zones", withWater("zones = 'z.geojson', temperature = 3, salinity = 0"), func(j *Job) any { return j.Water }, Water{Temperature: ptr(3.0), Salinity: ptr(0.0), Formula: "quan-fry", Zones: "z.geojson"}},
		{"one sensor for all points", withSensors("[[sensor]]\nname = 'a'\nrays.model = 'pulse'"), func(j *Job) any { return j.Sensors }, []Sensor{{Name: "a", Rays: Rays{Model: "pulse"}}}},
		{"most sensors", withSensors(manySensors(19)), func(j *Job) any { return len(j.Sensors) }, 19},
		{"sensors that share their default", withSensors(manySensors(2)), func(j *Job) any { return *j.Light.Wavelength }, 532.0},
		{"one light for two models", withSensors("light.wavelength = 515\n[[sensor]]\nname = 'a'\nwhere.k = [1]\nrays.model = 'pulse'\n[[sensor]]\nname = 'b'\nrays.model = 'vertical'"), func(j *Job) any { return [2]float64{j.Wavelength(j.Sensors[0]), j.Wavelength(j.Sensors[1])} }, [2]float64{515, 515}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := c.got(parse(t, c.text)); !reflect.DeepEqual(got, c.want) {
				t.Errorf("got %+v, want %+v", got, c.want)
			}
		})
	}
}

func TestLocalSettingsKeepDefaults(t *testing.T) {
	const gauge, grid, plane = "surface.gauge.file = 'g.csv'\n", "surface.grid.classes = [41, 42]\n", "surface.plane = { level = 1, at = [2, 3] }"
	sensor := "[[sensor]]\nname = 'a'\nwhere = { id = [1, 2] }\nrays = { model = 'pulse', trajectory = 't.csv' }\n"
	for _, c := range []struct{ name, plain, written string }{
		{"slopes", withSurface(plane), withSurface("surface.plane = { level = 1, at = [2, 3], slope_x = 0, slope_y = 0.0 }")},
		{"gap of stations", withWater("stations = 's.csv'"), withWater("stations = 's.csv', max_gap = 3600")},
		{"gauge", least + gauge, least + gauge + "surface.gauge.zero = 0\nsurface.gauge.max_gap = 3600"},
		{"grid", withSurface(grid), withSurface(grid + "surface.grid.reach = 5\nsurface.grid.window = 2\nsurface.grid.offset = -0.0")},
		{"order and repeats of classes", withSurface(grid), withSurface("surface.grid.classes = [42, 41, 42]")},
		{"notation of a time", withSurface(gauge + "surface.gauge.at = '2031-04-17T09:30:00Z'"), withSurface(gauge + "surface.gauge.at = 2031-04-17 11:30:00+02:00")},
		{"sensor", withSensors(sensor), withSensors("light.wavelength = 532\n[[sensor]]\nrays = { max_gap = 1, trajectory = 't.csv', model = 'pulse' }\nwhere.id = [2, 1, 2]\nname = 'a'")},
		{"list of sensors", withSensors(sensor), withSensors("sensor = [{ name = 'a', where.id = [1, 2], rays.model = 'pulse', rays.trajectory = 't.csv' }]")},
	} {
		if plain, written := settings(t, c.plain), settings(t, c.written); plain != written {
			t.Errorf("%s: settings are\n%s\nand written out\n%s", c.name, plain, written)
		}
	}
}

func TestLocalSettingsTellWhatMatters(t *testing.T) {
	const gauge, grid, profile = "surface.gauge.file = 'g.csv'\n", "surface.grid.classes = [41, 42]\n", "surface.profile = { centreline = 'c', levels = 'l', reach = "
	const images = "[[sensor]]\nname = 'b'\nrays.model = 'vertical'"
	sensor := "[[sensor]]\nname = 'a'\nwhere = { id = [1] }\nrays.model = 'pulse'\n"
	seen := map[string]string{settings(t, least): "least"}
	for name, text := range map[string]string{
		"stations":       withWater("stations = 's.csv'"),
		"other stations": withWater("stations = 't.csv'"),
		"gap":            withWater("stations = 's.csv', max_gap = 60"),
		"constants too":  withWater("stations = 's.csv', temperature = 0, salinity = 0"),
		"zones":          withWater("zones = 's.csv'"),
		"waterline":      withSurface("surface.plane.waterline = 'w.csv'"),
		"plane at 0":     withSurface("surface.plane = { level = 0, at = [0, 0] }"),
		"profile":        withSurface(profile + "50 }"),
		"profile reach":  withSurface(profile + "51 }"),
		"classes":        withSurface(grid),
		"cell":           withSurface(grid + "surface.grid.cell = 4"),
		"cells":          withSurface(grid + "surface.grid.reach = 4"),
		"window":         withSurface(grid + "surface.grid.window = 4"),
		"offset":         withSurface(grid + "surface.grid.offset = 0.01"),
		"points":         withSurface("surface.grid.points = 'p.csv'"),
		"gauge alone":    withSurface(gauge),
		"gauge":          least + gauge,
		"zero":           least + gauge + "surface.gauge.zero = 1",
		"gauge gap":      least + gauge + "surface.gauge.max_gap = 1",
		"at":             least + gauge + "surface.gauge.at = 0",
		"separation":     least + "surface.separation.file = 'g.csv'",
		"sensors":        withSensors(sensor + images),
		"name":           withSensors(strings.Replace(sensor, "'a'", "'c'", 1) + images),
		"condition":      withSensors(strings.Replace(sensor, "1", "2", 1) + images),
		"first sensor":   withSensors(sensor),
		"other sensor":   withSensors(images),
	} {
		s := settings(t, text)
		if other, ok := seen[s]; ok {
			t.Errorf("settings of %q and %q are the same:\n%s", name, other, s)
		}
		seen[s] = name
	}
}
