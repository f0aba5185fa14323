package job

import (
	"fmt"
	"strings"
	"testing"
)

// Each row is one mistake in the local water or the surface of pulseJob.
func TestParseLocalFaults(t *testing.T) {
	const (
		level   = "[surface]\nlevel = 0.42\n"
		water   = "temperature = 12\nsalinity = 34\n"
		profile = "[surface.profile]\ncentreline = 'c.geojson'\nlevels = 'l.csv'\nreach = 50\n"
		grid    = "[surface.grid]\nclasses = [41]\n"
		gauge   = "[surface.gauge]\nfile = 'g.csv'\n"
		aTime   = "want a time with its offset, such as 2031-04-17T09:30:00Z, or UTC seconds since 1970"
	)
	for _, c := range []struct{ name, old, text, want string }{
		{"temperature beside stations", "salinity = 34\n", "stations = 's.csv'\n", `job.toml:5: [water] salinity is missing, want a number beside temperature; with stations or zones both may be left out`},
		{"salinity beside zones", "temperature = 12\n", "zones = 'z.geojson'\n", `job.toml:5: [water] temperature is missing, want a number beside salinity; with stations or zones both may be left out`},
		{"hot water beside stations", water, "stations = 's.csv'\ntemperature = 40\nsalinity = 1\n", `job.toml:7: [water] temperature is 40, want -2 to 35 degrees C for quan-fry`},
		{"blank stations", water, "stations = ''\n", `job.toml:6: [water] stations is empty, want a file of x, y, temperature and salinity`},
		{"blank zones", water, "zones = ' '\n", `job.toml:6: [water] zones is empty, want a GeoJSON file`},
		{"zones of a number", water, "zones = 1\n", `job.toml:6: [water] zones is a number, want a string`},
		{"zones misspelt stand for temperature", water, "zone = 'z.geojson'\n", `job.toml:6: unknown key "zone" in [water]; did you mean "zones"?`},
		{"gap without stations", "salinity = 34\n", "salinity = 34\nmax_gap = 60\n", `job.toml:8: [water] max_gap has no effect without stations; remove it, or name the stations`},
		{"gap of 0 beside stations", water, "stations = 's.csv'\nmax_gap = 0\n", `job.toml:7: [water] max_gap is 0, want above 0 seconds`},

		{"empty plane", level, "[surface.plane]\n", `job.toml:8: [surface.plane] is not given, want level and at, or waterline`},
		{"plane without level", level, "[surface.plane]\nat = [0, 0]\n", `job.toml:8: [surface.plane] level is missing, want the elevation at the place named by at`},
		{"waterline and level", level, "[surface.plane]\nlevel = 1\nwaterline = 'w.csv'\n", `job.toml:9: [surface.plane] level has no effect with waterline; remove it, or remove waterline`},
		{"waterline and slope", level, "[surface.plane]\nslope_y = 0\nwaterline = 'w.csv'\n", `job.toml:9: [surface.plane] slope_y has no effect with waterline; remove it, or remove waterline`},
		{"blank waterline", level, "[surface.plane]\nwaterline = ''\n", `job.toml:9: [surface.plane] waterline is empty, want a file of points x, y, z`},
		{"waterline misspelt", level, "[surface.plane]\nwaterlin = 'w.csv'\n", `job.toml:9: unknown key "waterlin" in [surface.plane]; did you mean "waterline"?`},

		{"no centreline", level, strings.Replace(profile, "centreline = 'c.geojson'\n", "", 1), `job.toml:8: [surface.profile] centreline is missing, want a GeoJSON file with one line`},
		{"no levels", level, strings.Replace(profile, "levels = 'l.csv'\n", "", 1), `job.toml:8: [surface.profile] levels is missing, want a file of points x, y, z`},
		{"no reach", level, strings.Replace(profile, "reach = 50\n", "", 1), `job.toml:8: [surface.profile] reach is missing, want the length off the line that the surface reaches`},
		{"reach of 0", level, strings.Replace(profile, "50", "0", 1), `job.toml:11: [surface.profile] reach is 0, want above 0`},
		{"levels in place of level", level, "[surface]\nlevels = 'l.csv'\n", `job.toml:9: unknown key "levels" in [surface]; it belongs to [surface.profile]`},

		{"empty grid", level, "[surface.grid]\n", `job.toml:8: [surface.grid] has no surface points, want points = a file, or classes such as [41]`},
		{"points and classes", level, grid + "points = 'p.csv'\n", `job.toml:10: [surface.grid] has points (line 10) and classes (line 9), want one of them`},
		{"blank points", level, "[surface.grid]\npoints = ''\n", `job.toml:9: [surface.grid] points is empty, want a file of points x, y, z`},
		{"no class", level, strings.Replace(grid, "41", "", 1), `job.toml:9: [surface.grid] classes is empty, want a list of classes, such as [41]`},
		{"class of LAS beyond a byte", level, strings.Replace(grid, "41", "41, 256", 1), `job.toml:9: [surface.grid] classes item 2 is 256, want 0 to 255`},
		{"class below 0", level, strings.Replace(grid, "41", "-1", 1), `job.toml:9: [surface.grid] classes item 1 is -1, want 0 to 255`},
		{"class in parts", level, strings.Replace(grid, "41", "41.5", 1), `job.toml:9: [surface.grid] classes item 1 is a number, want a whole number`},
		{"one class", level, strings.Replace(grid, "[41]", "41", 1), `job.toml:9: [surface.grid] classes is a number, want a list, each item a whole number`},
		{"cell of 0", level, grid + "cell = 0\n", `job.toml:10: [surface.grid] cell is 0, want above 0`},
		{"no cells", level, grid + "reach = 0\n", `job.toml:10: [surface.grid] reach is 0, want above 0 and at most 50 cells; below 1 fills no gap`},
		{"too many cells", level, grid + "reach = 50.5\n", `job.toml:10: [surface.grid] reach is 50.5, want above 0 and at most 50 cells; below 1 fills no gap`},
		{"no window", level, grid + "window = -2\n", `job.toml:10: [surface.grid] window is -2, want above 0 seconds`},
		{"offset", level, grid + "offset = nan\n", `job.toml:10: [surface.grid] offset is nan, want a finite number`},
		{"three surfaces", level, level + profile + grid, `job.toml:14: [surface] has level (line 9) and profile (line 10) and grid (line 14), want one of level, column, [surface.plane], [surface.profile] and [surface.grid]`},

		{"no gauge", "", "[surface.gauge]\nzero = 1\n", `job.toml:12: [surface.gauge] file is missing, want a file of time and level`},
		{"blank gauge", "", strings.Replace(gauge, "g.csv", "", 1), `job.toml:13: [surface.gauge] file is empty, want a file of time and level`},
		{"gap of a gauge", "", gauge + "max_gap = 0\n", `job.toml:14: [surface.gauge] max_gap is 0, want above 0 seconds`},
		{"time without offset", "", gauge + "at = '2031-04-17T09:30:00'\n", `job.toml:14: [surface.gauge] at is "2031-04-17T09:30:00", ` + aTime},
		{"TOML time without offset", "", gauge + "at = 2031-04-17T09:30:00\n", `job.toml:14: [surface.gauge] at is 2031-04-17T09:30:00, ` + aTime},
		{"day", "", gauge + "at = 2031-04-17\n", `job.toml:14: [surface.gauge] at is 2031-04-17, ` + aTime},
		{"time of day", "", gauge + "at = 09:30:00\n", `job.toml:14: [surface.gauge] at is 09:30:00, ` + aTime},
		{"no such day", "", gauge + "at = '2031-02-29T09:30:00Z'\n", `job.toml:14: [surface.gauge] at is "2031-02-29T09:30:00Z", ` + aTime},
		{"boolean time", "", gauge + "at = true\n", `job.toml:14: [surface.gauge] at is a boolean, ` + aTime},
		{"list of times", "", gauge + "at = [1, 2]\n", `job.toml:14: [surface.gauge] at is a list, ` + aTime},
		{"infinite time", "", gauge + "at = inf\n", `job.toml:14: [surface.gauge] at is inf, want a finite number`},
		{"no separation", "", "[surface.separation]\n", `job.toml:12: [surface.separation] file is missing, want a file of nodes x, y, z`},
		{"separation alone", level, "[surface.separation]\nfile = 's.csv'\n", `job.toml:8: [surface] has no water surface, want level, column, [surface.plane], [surface.profile], [surface.grid] or [surface.gauge], or [water] zones with levels`},
	} {
		t.Run(c.name, func(t *testing.T) { wantFault(t, edit(t, pulseJob, c.old, c.text), c.want) })
	}
}

// manySensors are n sensors in two lines each, the last without a condition.
func manySensors(n int) string {
	var b strings.Builder
	for i := 1; i < n; i++ {
		fmt.Fprintf(&b, "[[sensor]]\nname = 's%d'\nwhere.id = [%d]\nrays.model = 'pulse'\n", i, i)
	}
	return b.String() + "[[sensor]]\nname = 'rest'\nrays.model = 'pulse'\n"
}

// Each row is one mistake in the sensors of a job; they begin at line 10.
func TestParseSensorFaults(t *testing.T) {
	const (
		rays  = "[rays]\nmodel = \"pulse\"\n"
		green = "[[sensor]]\nname = 'green'\nwhere = { id = [1] }\n[sensor.rays]\nmodel = 'pulse'\n"
		other = "[[sensor]]\nname = 'images'\n[sensor.rays]\nmodel = 'vertical'\n"
	)
	for _, c := range []struct{ name, text, want string }{
		{"beside rays", green + rays, `job.toml:15: the file has [rays] (line 15) and [[sensor]] (line 10), want one of them; the rays of a sensor stand in [sensor.rays]`},
		{"single brackets", "[sensor]\nname = 'a'\n[sensor.rays]\nmodel = 'pulse'\n", `job.toml:10: [[sensor]] is a table, want a list of tables`},
		{"too many", manySensors(20), `job.toml:86: [[sensor]] is there 20 times, want at most 19`},
		{"no name", strings.Replace(green, "name = 'green'\n", "", 1), `job.toml:10: [[sensor]] name is missing, want a name`},
		{"blank name", strings.Replace(green, "green", " ", 1), `job.toml:11: [[sensor]] name is empty, want a name`},
		{"name of a number", strings.Replace(green, "'green'", "7", 1), `job.toml:11: [[sensor]] name is a number, want a string`},
		{"name twice", green + strings.Replace(other, "images", "green", 1), `job.toml:16: [[sensor]] name is "green", as is that of line 11, want different names`},
		{"two for all points", other + strings.Replace(other, "images", "video", 1), `job.toml:14: [[sensor]] can never match, because that of line 10 has no where and takes all points; give it a where, or put it last`},
		{"after one for all points", other + green, `job.toml:14: [[sensor]] can never match, because that of line 10 has no where and takes all points; give it a where, or put it last`},
		{"no condition", strings.Replace(green, "id = [1]", "", 1), `job.toml:12: [sensor.where] has no column, want lists of values by column, such as classification = [2]`},
		{"no value", strings.Replace(green, "[1]", "[]", 1), `job.toml:12: [sensor.where] id is empty, want a list of values, such as [2, 9]`},
		{"boolean value", strings.Replace(green, "[1]", "[1, true]", 1), `job.toml:12: [sensor.where] id item 2 is a boolean, want a number or a string`},
		{"no model", green + strings.Replace(other, "model = 'vertical'\n", "", 1), `job.toml:17: [sensor.rays] model is missing, want "vertical", "pulse" or "multiview"`},
		{"no rays", green + "[[sensor]]\nname = 'images'\n", `job.toml:15: [sensor.rays] model is missing, want "vertical", "pulse" or "multiview"`},
		{"model", green + strings.Replace(other, "vertical", "sonar", 1), `job.toml:18: [sensor.rays] model is "sonar", want "vertical", "pulse" or "multiview"`},
		{"gap without trajectory", green + "max_gap = 2\n" + other, `job.toml:15: [sensor.rays] max_gap has no effect without trajectory; remove it, or name the trajectory`},
		{"range index of images", green + other + "range_index = 1.0003\n", `job.toml:19: [sensor.rays] range_index has no effect with model "vertical"; remove it, or use model = "pulse"`},
		{"unknown key", green + strings.Replace(other, "name", "nam", 1), `job.toml:16: unknown key "nam" in [[sensor]]; did you mean "name"?`},
		{"unknown key of rays", green + strings.Replace(other, "model", "modle", 1), `job.toml:18: unknown key "modle" in [sensor.rays]; did you mean "model"?`},
		{"key of rays", strings.Replace(green, "name", "model = 'pulse'\nname", 1), `job.toml:11: unknown key "model" in [[sensor]]; it belongs to [rays] or [sensor.rays]`},
		{"unknown table", green + strings.Replace(other, "[sensor.rays]", "[sensor.ray]", 1), `job.toml:17: unknown table [sensor.ray]; did you mean [sensor.rays]?`},
	} {
		t.Run(c.name, func(t *testing.T) { wantFault(t, edit(t, pulseJob, rays, c.text), c.want) })
	}
}

// Sensors may stand in one list at the top, in which each has a line of its own.
func TestParseInlineSensors(t *testing.T) {
	top := strings.Replace(least, "rays.model = \"vertical\"\n", "", 1)
	for _, c := range []struct{ name, text, want string }{
		{"empty list", "sensor = []", `job.toml:5: [[sensor]] is empty, want at least one table`},
		{"number in the list", "sensor = [\n1, { name = 'a', rays.model = 'x' }]", `job.toml:5: [[sensor]] is a number, want a table` + "\n" +
			`job.toml:6: [sensor.rays] model is "x", want "vertical", "pulse" or "multiview"`},
		{"second of a list", "sensor = [\n{ name = 'a', where = { a = [1] }, rays.model = 'pulse' },\n{ name = 'b', rays.modl = 'pulse' }]", `job.toml:7: unknown key "modl" in [sensor.rays]; did you mean "model"?`},
		{"table in the list", "sensor = [\n{ name = 'a', where = { a = [1] }, rays.model = 'pulse' },\n{}]", `job.toml:7: [[sensor]] name is missing, want a name` + "\n" +
			`job.toml:7: [sensor.rays] model is missing, want "vertical", "pulse" or "multiview"`},
	} {
		t.Run(c.name, func(t *testing.T) { wantFault(t, top+c.text, c.want) })
	}
}
