package pipeline

import (
	"bytes"
	"fmt"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"bentray/correct/medium"
)

// sensorsJob has two lasers with a trajectory each, images, and for what they leave a
// laser whose origins are in the cloud.
const sensorsJob = `[input]
files = ["raw/*.csv"]
[output]
folder = "true"
decimals = 9
[air]
temperature = 18
humidity = 60
[[sensor]]
name = "first laser"
where = { strip = ["north"], point_source_id = [1, 2] }
[sensor.rays]
model = "pulse"
trajectory = "flight.csv"
[[sensor]]
name = "second laser"
where.strip = ["north"]
rays = { model = "pulse", trajectory = "return.csv", range_index = 1.000123 }
[[sensor]]
name = "images"
where.strip = ["images"]
rays.model = "vertical"
`

// mixed is a cloud of all sensors, with the truth of each row; rows without one have
// no sensor.
type mixed struct {
	text   bytes.Buffer
	shots  []shot
	models []string
}

func (m *mixed) add(strip string, source int, model string, s shot) {
	row(&m.text, exact(s.raw[0]), exact(s.raw[1]), exact(s.raw[2]), strip, fmt.Sprint(source), exact(s.time))
	m.shots, m.models = append(m.shots, s), append(m.models, model)
}

// seeDown puts a raw point straight above its bed: depth by the ratio of the phase
// indices (Tewinkel 1963).
func (w sea) seeDown(bed vec) shot {
	s := shot{time: firstTime, bed: bed, raw: bed, waterLevel: w.at(bed[0], bed[1])}
	s.raw[2] = s.waterLevel - (s.waterLevel-bed[2])*w.air/w.waterPhase
	return s
}

// mixSensors simulates 1200 points through a plane of water. The images have the
// indices at 550 nm.
func mixSensors(t *testing.T) *mixed {
	w, r, m := standardSea(t), newRand(15), &mixed{}
	w.slopeX, w.slopeY = 0.003, -0.002
	second, images := w, seaAt(t, 550)
	second.rangeNg = 1.000123
	images.level, images.slopeX, images.slopeY = w.level, w.slopeX, w.slopeY
	m.text.WriteString("x,y,z,strip,point_source_id,gps_time\n")
	for i := range 300 {
		time := firstTime + 29*r.Float64()
		home := onLine(time).plus(1, vec{0, 25, 15}) // of the second laser
		at := func(from vec) vec { return vec{from[0] + 60*r.Float64(), from[1] + 60*r.Float64(), -15 * r.Float64()} }
		m.add("north", 1+i%2, "pulse", w.see(time, onLine(time), at(onLine(time))))
		m.add("images", 1, "vertical", images.seeDown(at(onLine(time))))
		m.add("north", 3, "pulse", second.see(time, home, at(home)))
		m.add("south", 1, "", shot{time: time, raw: at(home)})
	}
	return m
}

// seaAt is the standard sea in light of another wavelength.
func seaAt(t testing.TB, nm float64) (w sea) {
	t.Helper()
	air := medium.StandardAir()
	air.TemperatureC, air.HumidityPercent = 18, 60
	var errs [2]error
	w.air, w.rangeNg, errs[0] = air.Index(nm)
	w.waterPhase, w.waterGroup, errs[1] = medium.QuanFry.Index(medium.Water{TemperatureC: 17.5, Salinity: 34.9}, nm)
	if errs[0] != nil || errs[1] != nil {
		t.Fatal(errs)
	}
	return w
}

// flights are the trajectories of both lasers.
func flights() files {
	var second bytes.Buffer
	second.WriteString("gps_time,x,y,z\n")
	for k := range flightSize {
		p := record(k).plus(1, vec{0, 25, 15})
		row(&second, exact(firstTime+flightStep*float64(k)), exact(p[0]), exact(p[1]), exact(p[2]))
	}
	return files{"flight.csv": truthCases[0].flight(), "return.csv": second.String()}
}

// sensorWaters are ways to say the same water: constants, and a zone of the same.
var sensorWaters = map[string]string{
	"constants": seaWater,
	"a zone":    "[water]\nzones = \"zones.geojson\"\n",
	"casts":     "[water]\nstations = \"casts.csv\"\n",
}

// Each point is corrected by the first sensor that it matches, none by two; what
// matches none is no_rule and counted.
func TestSensorsEachCorrectTheirOwn(t *testing.T) {
	m := mixSensors(t)
	f := flights()
	f["raw/a.csv"] = m.text.String()
	f["zones.geojson"] = zonesFile([]place{{"All", [][2]float64{{-9e3, -9e3}, {9e3, -9e3}, {9e3, 9e3}, {-9e3, 9e3}}, 17.5, 34.9, nan}})
	f["casts.csv"] = "x,y,temperature,salinity,depth\n5,6,17.5,34.9,1\n5,6,17.5,34.9,20\n"
	for name, water := range sensorWaters {
		t.Run(name, func(t *testing.T) {
			folder := t.TempDir()
			f.write(t, folder)
			runJob(t, loadJob(t, folder, sensorsJob+water+"[surface.plane]\nlevel = 0.42\nat = [0, 0]\nslope_x = 0.003\nslope_y = -0.002\n"), Options{})
			m.check(t, readTable(t, readFile(t, folder, "true/a.csv")))
			r := readReceipt(t, filepath.Join(folder, "true/a.csv"))
			if want := map[string]int64{"corrected": 900, "no_rule": 300}; !maps.Equal(r.Outcomes, want) {
				t.Errorf("outcomes are %v, want %v", r.Outcomes, want)
			}
			if want := "300 of 1200 points match no sensor"; !slices.Contains(r.Cautions, want) {
				t.Errorf("cautions are %q, want %q", r.Cautions, want)
			}
			green, images := seaAt(t, 532), seaAt(t, 550)
			near(t, 0, "the least n_water", r.Ranges["n_water"][0], images.waterPhase, 1e-12)
			near(t, 0, "the greatest n_water", r.Ranges["n_water"][1], green.waterPhase, 1e-12)
			for _, group := range r.Ranges["ng_water"] {
				near(t, 0, "ng_water", group, green.waterGroup, 1e-12)
			}
		})
	}
}

func (m *mixed) check(t *testing.T, got table) {
	t.Helper()
	for i, s := range m.shots {
		if model := got.text(t, i, "model"); model != m.models[i] {
			t.Fatalf("row %d: the model is %q, want %q", i, model, m.models[i])
		}
		pulse := m.models[i] == "pulse"
		for _, name := range []string{"ng_water", "ng_air", "incidence_deg", "refraction_deg", "origin_x", "ray_count"} {
			if has := got.text(t, i, name) != ""; has != pulse {
				t.Fatalf("row %d of model %q: %s is %q", i, m.models[i], name, got.text(t, i, name))
			}
		}
		if m.models[i] == "" {
			if outcome := got.text(t, i, "outcome"); outcome != "no_rule" || got.text(t, i, "n_water") != "" || got.text(t, i, "water_source") != "" {
				t.Fatalf("row %d is %q", i, got.rows[i])
			}
			continue
		}
		for k, name := range []string{"x", "y", "z"} {
			near(t, i, name, got.number(t, i, name), s.bed[k], 1e-9+nearOrigin)
		}
		near(t, i, "water_level", got.number(t, i, "water_level"), s.waterLevel, 1e-9)
		near(t, i, "temperature", got.number(t, i, "temperature"), 17.5, 0)
	}
}

// One sensor takes its origins from a trajectory, another from the cloud's columns,
// which stay as they are.
func TestSensorsWithAndWithoutTrajectory(t *testing.T) {
	w, f := standardSea(t), flights()
	flown := w.see(firstTime+1.25, onLine(firstTime+1.25), vec{80, 20, -9})
	given := w.see(firstTime, vec{5, 6, 400}, vec{50, 60, -8})
	f["raw/a.csv"] = "x,y,z,gps_time,strip,origin_x,origin_y,origin_z\n" +
		strings.Join([]string{exact(flown.raw[0]), exact(flown.raw[1]), exact(flown.raw[2]), exact(flown.time), "north,,,\n"}, ",") +
		strings.Join([]string{exact(given.raw[0]), exact(given.raw[1]), exact(given.raw[2]), exact(given.time), "south,5,6,400\n"}, ",")
	job := pulseJob[:strings.Index(pulseJob, "[rays]")] + seaWater + "[surface]\nlevel = 0.42\n" +
		"[[sensor]]\nname = \"flown\"\nwhere.strip = [\"north\"]\nrays = { model = \"pulse\", trajectory = \"flight.csv\" }\n[[sensor]]\nname = \"given\"\nrays.model = \"pulse\"\n"
	got := correctFiles(t, f, inNanometres(job))
	compareShots(t, got, []shot{flown, given}, 1e-9)
	if origins := got.column(t, "origin_x"); !slices.Equal(origins, []string{"", "5"}) {
		t.Errorf("origin_x is %q, want it as it was", origins)
	}
}
