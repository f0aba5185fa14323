package main

import (
	"fmt"
	"strings"
	"testing"
)

const (
	goodSurface = "[surface]\nlevel = 0\n"
	goodWater   = "temperature = 17.5\nsalinity = 34.9\n"
	gpsTimes    = `times in column "gps_time" are not read in a file beside the clouds, want a column "time" in UTC (seconds since 1970, or dates with their offset); rename what holds at all times`
	square      = "[[0,0],[9,0],[9,9],[0,9],[0,0]]"
)

// wrongZones is a job whose zones are one feature of the ring and properties given.
func wrongZones(name, ring, properties, want string) badInput {
	text := `{"type":"Feature","properties":{` + properties + `},"geometry":{"type":"Polygon","coordinates":[` + ring + `]}}`
	return badInput{
		name: "zones: " + name, files: map[string]string{"zones.geojson": text},
		old: goodWater, new: goodWater + "zones = \"zones.geojson\"\n", want: "zones.geojson: " + want,
	}
}

// wrongSheet is a job with a table of a file in place of its level.
func wrongSheet(name, surface, file, text, want string) badInput {
	return badInput{name: file + ": " + name, files: map[string]string{file: text}, old: goodSurface, new: surface, want: file + ": " + want}
}

func wrongGauge(name, text, want string) badInput {
	return wrongSheet(name, "[surface.gauge]\nfile = \"gauge.csv\"\n", "gauge.csv", text, want)
}

func wrongWaterline(name, text, want string) badInput {
	return wrongSheet(name, "[surface.plane]\nwaterline = \"edge.csv\"\n", "edge.csv", text, want)
}

func wrongStations(name, text, want string) badInput {
	return badInput{
		name: "stations: " + name, files: map[string]string{"stations.csv": text},
		old: goodWater, new: "stations = \"stations.csv\"\n", want: "stations.csv: " + want,
	}
}

// wrongProfile has a good centreline or good levels unless others are given.
func wrongProfile(name, line, levels, want string) badInput {
	f := map[string]string{"line.geojson": `{"type":"LineString","coordinates":[[0,0],[100,0]]}`, "levels.csv": "x,y,z\n0,0,2\n100,0,1\n"}
	if line != "" {
		f["line.geojson"] = line
	}
	if levels != "" {
		f["levels.csv"] = levels
	}
	return badInput{
		name: "profile: " + name, files: f, old: goodSurface, want: want,
		new: "[surface.profile]\ncentreline = \"line.geojson\"\nlevels = \"levels.csv\"\nreach = 50\n",
	}
}

// oneBank is a waterline of points along one straight line.
func oneBank() string {
	var b strings.Builder
	b.WriteString("x,y,z\n")
	for i := range 20 {
		fmt.Fprintf(&b, "%d,%d,0.5\n", i, 2*i)
	}
	return b.String()
}

// wrongLocalCalls are jobs whose local water or surface is refused.
var wrongLocalCalls = []badInput{
	wrongZones("a ring that crosses itself", "[[0,0],[9,9],[9,0],[0,9],[0,0]]", `"name":"A","level":1`, `ring 1: edges 1 and 3 cross near 4.500 4.500, want a ring that does not cross itself`),
	wrongZones("an open ring", "[[0,0],[9,0],[9,9],[0,9]]", `"name":"A","level":1`, `ring 1: not closed: it starts at [0 0] and ends at [0 9], want the last position equal to the first`),
	wrongZones("no values", square, `"name":"A"`, `no values, want temperature and salinity, or level, or all three`),
	wrongZones("no name", square, `"level":1`, `no name, want a text as property name`),
	wrongZones("half a water", square, `"name":"A","temperature":12`, `temperature stands without salinity, want both or neither`),
	wrongZones("a text for a level", square, `"name":"A","level":"1"`, `level is "1", want a number`),
	wrongZones("a misspelt property", square, `"name":"A","temperature":17,"salinty":34`, `property is "salinty"; did you mean "salinity"?`),
	wrongZones("a property in other letters", square, `"Name":"A","level":1`, `property is "Name", want it in the letters "name"`),

	wrongWaterline("two points", "x,y,z\n0,0,1\n9,9,1\n", `plane has 2 waterline points, want at least 3`),
	wrongWaterline("one straight bank", oneBank(), `waterline points lie on one line, want points on both banks, or give the plane by level and slopes`),
	wrongWaterline("no z", "x,y,h\n0,0,1\n", `no column "z" (it is needed); the columns are x, y, h`),
	wrongWaterline("an empty height", "x,y,z\n0,0,1\n9,9,\n0,9,1\n", `line 3: a coordinate is not finite, want x, y and z`),
	wrongWaterline("a word for a height", "x,y,z\n0,0,1\n9,9,high\n0,9,1\n", `line 3: z is "high", want a number`),

	wrongGauge("a time twice", "time,level\n1,0\n2,0\n2,1\n3,0\n", `line 4: gauge: time 2 repeats the one before it, want each time once`),
	wrongGauge("times that fall", "time,level\n1,0\n3,0\n2,1\n", `line 4: gauge: time 2 comes after 3, want records sorted by time`),
	wrongGauge("one record", "time,level\n1,0\n", `gauge has 1 record, want at least 2`),
	wrongGauge("no records", "time,level\n", `there are no gauge records, want at least 2`),
	wrongGauge("a time without offset", "time,level\n2026-05-01T10:00:00Z,0\n2026-05-01T10:10:00,0\n", `line 3: time is "2026-05-01T10:10:00", want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z`),
	wrongGauge("an empty time", "time,level\n1,0\n,0\n", `line 3: time is "", want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z`),
	wrongGauge("an empty level", "time,level\n1,0\n2,\n", `line 3: level is empty or not finite, want a level in every record`),
	wrongGauge("a word for a time", "time,level\n1,0\nnoon,0\n", `line 3: time is "noon", want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z`),
	wrongGauge("a time that is no number", "time,level\nNaN,0\n1,0\n", `line 2: time is "NaN", want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z`),
	wrongGauge("a wrong record behind other lines", "# of the pier\n\ntime,level,name\n1,0,\"the\npier\"\n\n2,0,\"the\npier\"\n2,1,\"the\npier\"\n", `line 9: gauge "the\npier": time 2 repeats the one before it, want each time once`),
	wrongGauge("GPS times", "gps_time,level\n1,0\n2,0\n", gpsTimes),
	wrongGauge("no level", "time,height\n1,0\n2,0\n", `no column "level" (it is needed); the columns are time, height`),
	wrongGauge("two gauges without places", "time,level,name\n1,0,A\n2,0,A\n1,0,B\n2,0,B\n", `there are 2 gauges without positions, want x and y with every record`),
	wrongGauge("half a place", "time,level,x\n1,0,5\n2,0,5\n", `there is only one of the columns x and y, want both or neither`),

	wrongStations("no rows", "x,y,temperature,salinity\n", `there are no station records, want at least 1`),
	wrongStations("no salinity", "x,y,temperature\n1,2,3\n", `no column "salinity" (it is needed); the columns are x, y, temperature`),
	wrongStations("an empty salinity", "x,y,temperature,salinity\n1,2,3,\n", `line 2: a value is not finite, want temperature and salinity`),
	wrongStations("a time twice", "x,y,temperature,salinity,time\n1,2,3,4,5\n1,2,3,5,5\n", `line 3: station has time 5 twice, want each time once, or a column depth where the rows are a cast`),
	wrongStations("a cast without depths", "x,y,temperature,salinity,time\n1,2,9,4,2026-05-01T10:00:00Z\n1,2,8,5,2026-05-01T10:00:00Z\n", `line 3: station has time 1777629600 twice, want each time once, or a column depth where the rows are a cast`),
	wrongStations("GPS times", "x,y,temperature,salinity,GPS_Time\n1,2,3,4,5\n", strings.Replace(gpsTimes, "gps_time", "GPS_Time", 1)),
	wrongStations("above the water", "x,y,temperature,salinity,depth\n1,2,3,4,-1\n", `line 2: depth is -1 m, want 0 or more, positive down`),
	wrongStations("a name at two places", "x,y,temperature,salinity,name\n1,2,3,4,A\n2,2,3,4,A\n", `line 3: station "A" is at 2 2, before at 1 2, want one place for one name`),
	wrongStations("a time without offset", "x,y,temperature,salinity,time\n1,2,3,4,2026-05-01 10:00\n", `line 2: time is "2026-05-01 10:00", want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z`),

	wrongProfile("a polygon for a line", `{"type":"Polygon","coordinates":[`+square+`]}`, "", `line.geojson: geometry is a Polygon, want a LineString`),
	wrongProfile("a line of one place", `{"type":"LineString","coordinates":[[5,5],[5,5]]}`, "", `line.geojson: all 2 positions of the line are [5 5], want at least 2 different ones`),
	wrongProfile("levels elsewhere", "", "x,y,z\n0,900,2\n100,0,1\n", `levels.csv: 1 of 2 level points lie within 50 m of the centreline, want at least 2`),

	wrongSheet("scattered points", goodSurface+"[surface.separation]\nfile = \"above.csv\"\n", "above.csv", "x,y,z\n0,0,1\n1,0.5,1\n7,3,1\n", `separation has no cell with four nodes, want a regular grid`),
	wrongSheet("GPS times", "[surface.grid]\npoints = \"points.csv\"\n", "points.csv", "x,y,z,gps_time\n0,0,1,5\n9,9,1,6\n", gpsTimes),
	wrongSheet("few points", "[surface.grid]\npoints = \"points.csv\"\n", "points.csv", "x,y,z\n0,0,1\n9,9,1\n", `no cell of 9 m has enough of the 2 surface points near it, want 6 points around it: take larger cells`),

	{name: "a class that no point has", files: map[string]string{"raw/a.csv": "x,y,z,classification,origin_x,origin_y,origin_z\n5,6,-10,40,5,6,400\n"}, old: goodSurface, new: "[surface.grid]\nclasses = [41, 42]\n", want: `job.toml: [surface.grid] classes: no point of the clouds has a classification of [41 42]`},
	{name: "classes without a column", old: goodSurface, new: "[surface.grid]\nclasses = [41]\n", want: `job.toml: [surface.grid] classes: none of the clouds can be read: raw/a.csv: no column "classification" ([surface.grid] classes looks at it); the columns are x, y, z, origin_x, origin_y, origin_z, gps_time`},
	{name: "few points of a class", files: map[string]string{"raw/a.csv": "x,y,z,classification,origin_x,origin_y,origin_z\n5,6,-10,41,5,6,400\n"}, old: goodSurface, new: "[surface.grid]\nclasses = [41]\n", want: `job.toml: [surface.grid] classes: no cell of 1 m has enough of the 1 surface points near it, want 6 points around it: take larger cells`},
	{name: "a gauge that is not there", old: goodSurface, new: "[surface.gauge]\nfile = \"gauge.csv\"\n", want: `job.toml: [surface.gauge] file: gauge.csv: no such file or directory`},
	{name: "zones that are not there", old: goodWater, new: goodWater + "zones = \"zones.geojson\"\n", want: `job.toml: [water] zones: zones.geojson: no such file or directory`},
	{name: "several faults at once", files: map[string]string{"gauge.csv": "time,level\n", "stations.csv": "x,y,temperature,salinity\n"}, old: goodWater + goodSurface, new: "stations = \"stations.csv\"\n[surface.gauge]\nfile = \"gauge.csv\"\n", want: `stations.csv: there are no station records, want at least 1
gauge.csv: there are no gauge records, want at least 2`},
}

// What a person may overlook is a caution, in the plan and in the report.
func TestLocalCautions(t *testing.T) {
	inDegrees := `{"type":"Feature","properties":{"name":"A","level":1},"geometry":{"type":"Polygon","coordinates":[[[10.1,54.1],[10.2,54.1],[10.2,54.2],[10.1,54.1]]]}}`
	badInput{
		files: map[string]string{"zones.geojson": inDegrees, "raw/a.csv": strings.ReplaceAll(goodCloud, "5,6,", "500005,6000006,")},
		old:   goodWater, new: goodWater + "zones = \"zones.geojson\"\n",
	}.lay(t)
	caution := "the zones (x 10.1 to 10.2, y 54.1 to 54.2) do not meet the points (x 500005.0 to 500005.0, y 6000006.0 to 6000006.0); are both in one projected system?\n"
	for _, command := range []string{"plan", "run"} {
		code, out, errs := call(t, command, "job.toml")
		want(t, command, code, exitDone, errs, "")
		if !strings.Contains(out, caution) {
			t.Errorf("%s: the report is %q, want %q in it", command, out, caution)
		}
	}
}
