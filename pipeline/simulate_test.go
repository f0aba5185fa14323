package pipeline

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct/medium"
)

// An independent simulation of a laser survey. It shares no code and no formula
// with the ray models: the entry comes from the optical path (Fermat), not from
// Snell's law. Lengths are metres, z up.

const seed = 20261201

type vec [3]float64

func (v vec) plus(s float64, w vec) vec { return vec{v[0] + s*w[0], v[1] + s*w[1], v[2] + s*w[2]} }
func (v vec) dot(w vec) float64         { return v[0]*w[0] + v[1]*w[1] + v[2]*w[2] }
func (v vec) length() float64           { return math.Sqrt(v.dot(v)) }

// sea is a plane water surface with the indices above and below it.
type sea struct {
	level, slopeX, slopeY                float64 // z = level + slopeX x + slopeY y
	air, waterPhase, waterGroup, rangeNg float64
}

func (w sea) at(x, y float64) float64 { return w.level + w.slopeX*x + w.slopeY*y }

// entry returns where light from origin to bed crosses the surface: on the line
// between their feet, where the derivative of the optical path is zero.
func (w sea) entry(origin, bed vec) vec {
	up := vec{-w.slopeX, -w.slopeY, 1}
	up = up.plus(1/up.length()-1, up)
	above := (origin[2] - w.at(origin[0], origin[1])) * up[2]
	below := (w.at(bed[0], bed[1]) - bed[2]) * up[2]
	from, to := origin.plus(-above, up), bed.plus(below, up)
	run := to.plus(-1, from)
	low, high := 0.0, 1.0
	for range 60 {
		mid := (low + high) / 2
		s, rest := mid*run.length(), (1-mid)*run.length()
		if w.air*s/math.Hypot(above, s) < w.waterPhase*rest/math.Hypot(below, rest) {
			low = mid
		} else {
			high = mid
		}
	}
	return from.plus(low, run)
}

// shot is one laser point with its truth.
type shot struct {
	time                   float64 // s
	origin, bed, raw       vec
	level                  float64 // of the surface at the raw plan position
	entryLevel, waterLevel float64
	incidence, refraction  float64 // degrees
}

// see puts the raw point straight on from the entry, at the range that the
// travel time has at the file's index.
func (w sea) see(time float64, origin, bed vec) shot {
	entry := w.entry(origin, bed)
	in, down := entry.plus(-1, origin), bed.plus(-1, entry)
	raw := entry.plus(down.length()*w.waterGroup/w.rangeNg/in.length(), in)
	s := shot{time: time, origin: origin, bed: bed, raw: raw, level: w.at(raw[0], raw[1])}
	s.entryLevel, s.waterLevel = entry[2], w.at(bed[0], bed[1])
	normal := vec{w.slopeX, w.slopeY, -1}
	s.incidence = math.Acos(in.dot(normal)/in.length()/normal.length()) * 180 / math.Pi
	s.refraction = math.Acos(min(1, down.dot(normal)/down.length()/normal.length())) * 180 / math.Pi
	return s
}

// flight is a straight and level line at 60 m/s with records every half second.
const (
	firstTime  = 351234567.25
	flightStep = 0.5
	flightSize = 61
)

// record is the position k half seconds after the first, swaying a little.
func record(k int) vec {
	return vec{30 * float64(k), 4 * math.Sin(float64(k)), 420 + 3*math.Cos(float64(k))}
}

// onLine is the position at a time, linear between records.
func onLine(time float64) vec {
	at := (time - firstTime) / flightStep
	k := min(int(at), flightSize-2)
	from, to := record(k), record(k+1)
	return from.plus(at-float64(k), to.plus(-1, from))
}

// standardSea has the indices of the jobs of these tests.
func standardSea(t *testing.T) sea {
	t.Helper()
	phase, group, err := medium.QuanFry.Index(medium.Water{TemperatureC: 17.5, Salinity: 34.9}, 532)
	if err != nil {
		t.Fatal(err)
	}
	air := medium.StandardAir()
	air.TemperatureC, air.HumidityPercent = 18, 60
	airPhase, airGroup, err := air.Index(532)
	if err != nil {
		t.Fatal(err)
	}
	return sea{level: 0.42, air: airPhase, waterPhase: phase, waterGroup: group, rangeNg: airGroup}
}

// shoot simulates n points along the line: to 30 m deep, to 24 degrees off
// nadir, by increasing time. With choppy set every point has a level of its own.
func (w sea) shoot(n int, choppy bool) []shot {
	r := rand.New(rand.NewPCG(seed, uint64(n)))
	shots := make([]shot, n)
	for i := range shots {
		time := firstTime + flightStep*(flightSize-1)*(float64(i)+r.Float64())/float64(n)
		origin := onLine(time)
		here := w
		if choppy {
			here.level += 0.3 * r.NormFloat64()
		}
		away := (origin[2] - here.level) * math.Tan(24*r.Float64()*math.Pi/180)
		turn, depth := 2*math.Pi*r.Float64(), 0.01+29.99*r.Float64()
		x, y := origin[0]+away*math.Cos(turn), origin[1]+away*math.Sin(turn)
		shots[i] = here.see(time, origin, vec{x, y, here.at(x, y) - depth})
	}
	return shots
}
