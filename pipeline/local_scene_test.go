package pipeline

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"bentray/correct/medium"
)

// An independent simulation of light under any water surface: the entry comes from
// halving the ray, the bend from Snell's law for angles in the plane of ray and
// normal. It shares no code and no formula with the ray models.

// scene is a water surface with the indices above and below it. The surface gives
// its elevation and its slopes at a plan position and a time (UTC).
type scene struct {
	surface func(x, y, utc float64) (z, slopeX, slopeY float64)
	sea
}

// meet returns where the ray from origin along the unit vector d, which has passed
// the surface after twice the way to elevation 0, crosses it.
func (c *scene) meet(origin, d vec, utc float64) vec {
	low, high := 0.0, -2*origin[2]/d[2]
	for range 80 {
		mid := (low + high) / 2
		p := origin.plus(mid, d)
		if z, _, _ := c.surface(p[0], p[1], utc); p[2] > z {
			low = mid
		} else {
			high = mid
		}
	}
	return origin.plus(low, d)
}

// under returns the direction of light along d below a surface with the slopes given,
// and its angles to the normal (rad).
func (c *scene) under(d vec, slopeX, slopeY float64) (wet vec, incidence, refraction float64) {
	down := vec{slopeX, slopeY, -1}
	down = down.plus(1/down.length()-1, down)
	along := d.plus(-d.dot(down), down)
	incidence = math.Atan2(along.length(), d.dot(down))
	refraction = math.Asin(c.air * math.Sin(incidence) / c.waterPhase)
	if incidence == 0 {
		return d, 0, 0
	}
	zero := vec{}
	return zero.plus(math.Cos(refraction), down).plus(math.Sin(refraction)/along.length(), along), incidence, refraction
}

// fire follows a pulse from its origin towards a place above the bed, and puts the raw
// point straight on from the entry at the range that the travel time has at the file's
// index. The bed is so deep below the entry.
func (c *scene) fire(utc float64, origin, toward vec, below float64) shot {
	d := toward.plus(-1, origin)
	d = d.plus(1/d.length()-1, d)
	return c.enter(utc, origin, d, c.meet(origin, d, utc), below)
}

// enter goes on for fire from an entry along the unit vector d.
func (c *scene) enter(utc float64, origin, d, entry vec, below float64) shot {
	_, slopeX, slopeY := c.surface(entry[0], entry[1], utc)
	wet, incidence, refraction := c.under(d, slopeX, slopeY)
	way := below / -wet[2]
	s := shot{time: utc, origin: origin, bed: entry.plus(way, wet), raw: entry.plus(way*c.waterGroup/c.rangeNg, d), entryLevel: entry[2]}
	s.level, _, _ = c.surface(s.raw[0], s.raw[1], utc)
	s.waterLevel, _, _ = c.surface(s.bed[0], s.bed[1], utc)
	s.incidence, s.refraction = incidence*180/math.Pi, refraction*180/math.Pi
	return s
}

// random fires into a square of the side given, from 400 m above it, up to so many
// degrees off nadir, to between 0.5 m and the depth given.
func (c *scene) random(r *rand.Rand, utc, side, offNadir, depth float64) shot {
	x, y := side*r.Float64(), side*r.Float64()
	away, turn := 400*math.Tan(offNadir*r.Float64()*math.Pi/180), 2*math.Pi*r.Float64()
	return c.fire(utc, vec{x + away*math.Cos(turn), y + away*math.Sin(turn), 400}, vec{x, y, 0}, 0.5+(depth-0.5)*r.Float64())
}

// still is a surface that does not change.
func still(z, slopeX, slopeY float64) func(x, y, utc float64) (float64, float64, float64) {
	return func(x, y, _ float64) (float64, float64, float64) { return z + slopeX*x + slopeY*y, slopeX, slopeY }
}

// seaOf is the standard sea with another water.
func seaOf(t testing.TB, temperature, salinity float64) sea {
	t.Helper()
	phase, group, err := medium.QuanFry.Index(medium.Water{TemperatureC: temperature, Salinity: salinity}, 532)
	if err != nil {
		t.Fatal(err)
	}
	air := medium.StandardAir()
	air.TemperatureC, air.HumidityPercent = 18, 60
	airPhase, airGroup, err := air.Index(532)
	if err != nil {
		t.Fatal(err)
	}
	return sea{air: airPhase, waterPhase: phase, waterGroup: group, rangeNg: airGroup}
}

func newRand(stream uint64) *rand.Rand { return rand.New(rand.NewPCG(seed, stream)) }

// cloudOf writes shots with their origins, a class and, unless clock is nil, their
// times on another scale.
func cloudOf(shots []shot, class int, clock func(utc float64) float64) string {
	var b bytes.Buffer
	b.WriteString("x,y,z,classification,origin_x,origin_y,origin_z")
	if clock != nil {
		b.WriteString(",gps_time")
	}
	b.WriteByte('\n')
	for _, s := range shots {
		fields := []string{exact(s.raw[0]), exact(s.raw[1]), exact(s.raw[2]), fmt.Sprint(class), exact(s.origin[0]), exact(s.origin[1]), exact(s.origin[2])}
		if clock != nil {
			fields = append(fields, exact(clock(s.time)))
		}
		row(&b, fields...)
	}
	return b.String()
}

// asUTC is the clock of a cloud whose times are UTC.
func asUTC(utc float64) float64 { return utc }

// pulseJob is a job of the clouds below raw/ with the media of standardSea; tables
// come behind it.
const pulseJob = "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\n[air]\ntemperature = 18\nhumidity = 60\n[rays]\nmodel = \"pulse\"\n"

const seaWater = "[water]\ntemperature = 17.5\nsalinity = 34.9\n"

// inNanometres writes lengths with nine decimals.
func inNanometres(job string) string {
	return strings.Replace(job, "[output]\n", "[output]\ndecimals = 9\n", 1)
}

// correctFiles does a job of which raw/a.csv is a cloud and returns its output.
func correctFiles(t *testing.T, f files, jobText string) table {
	t.Helper()
	folder := t.TempDir()
	f.write(t, folder)
	runJob(t, loadJob(t, folder, jobText), Options{Workers: 2})
	return readTable(t, readFile(t, folder, "true/a.csv"))
}

// fourDecimals is half a unit of the last place of lengths, and a little for the
// rounding of the raw point.
const fourDecimals = 0.5e-4 + 1e-9

// compareShots holds an output against the truth.
func compareShots(t *testing.T, got table, shots []shot, tolerance float64) {
	t.Helper()
	if len(got.rows) != len(shots) {
		t.Fatalf("%d rows, want %d", len(got.rows), len(shots))
	}
	for i, s := range shots {
		if outcome := got.text(t, i, "outcome"); outcome != "corrected" {
			t.Fatalf("seed %d, row %d is %s, want corrected", seed, i, outcome)
		}
		for k, name := range []string{"x", "y", "z"} {
			near(t, i, name, got.number(t, i, name), s.bed[k], tolerance)
		}
		near(t, i, "water_level", got.number(t, i, "water_level"), s.waterLevel, tolerance)
		near(t, i, "entry_level", got.number(t, i, "entry_level"), s.entryLevel, tolerance)
		near(t, i, "depth", got.number(t, i, "depth"), s.waterLevel-s.bed[2], tolerance)
		near(t, i, "incidence_deg", got.number(t, i, "incidence_deg"), s.incidence, 0.6e-5+tolerance)
		near(t, i, "refraction_deg", got.number(t, i, "refraction_deg"), s.refraction, 0.6e-5+tolerance)
	}
}

// lines writes rows of numbers below a header.
func lines(header string, rows ...[]float64) string {
	var b bytes.Buffer
	b.WriteString(header + "\n")
	for _, r := range rows {
		fields := make([]string, len(r))
		for i, v := range r {
			fields[i] = exact(v)
		}
		row(&b, fields...)
	}
	return b.String()
}

// feature is a GeoJSON feature of one ring, which is closed here.
func feature(properties string, ring ...[2]float64) string {
	var b strings.Builder
	for _, p := range append(ring, ring[0]) {
		fmt.Fprintf(&b, ",[%s,%s]", exact(p[0]), exact(p[1]))
	}
	return fmt.Sprintf(`{"type":"Feature","properties":{%s},"geometry":{"type":"Polygon","coordinates":[[%s]]}}`, properties, b.String()[1:])
}

func collection(features ...string) string {
	return `{"type":"FeatureCollection","features":[` + strings.Join(features, ",\n") + "]}"
}

// inFormat has the job's CSV files in another format.
func inFormat(job, format string) string { return strings.ReplaceAll(job, ".csv", "."+format) }
