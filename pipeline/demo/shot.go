package demo

import (
	"math"
	"math/rand/v2"
)

// The laser sweeps to and fro across the line.
const (
	sweepPulses = 100  // pulses from one edge to the other
	edgeDeg     = 20.0 // off nadir at the edge, at the level of the water
	jitterDeg   = 0.1
	lostEvery   = 40_000 // pulses of which one has no coordinates
)

// shot is one row of the cloud, and the truth of it.
type shot struct {
	timeUS    int64 // microseconds since the take-off
	line      int
	bed       vec
	apparent  vec // in millimetres, as the file has it
	lost      bool
	intensity int
	outcome   string  // what the correction should say
	depth     float64 // of the bed, m; below 0 on land
	remark    string
}

// shooter fires the pulses of a survey. Equal seeds give equal pulses.
type shooter struct {
	light         light
	outline, hole ring
	random        *rand.Rand
}

func newShooter() (*shooter, error) {
	l, err := newLight(waterTemperatureC, salinity, laserNM)
	if err != nil {
		return nil, err
	}
	s := &shooter{light: l, random: rand.New(rand.NewPCG(41, 532))}
	s.outline, s.hole = waterPolygon()
	return s, nil
}

// fire sends one pulse of a line.
func (s *shooter) fire(l *flightLine, pulse int) shot {
	origin := l.origin(pulse)
	bed := s.aim(l, origin, pulse)
	shot := shot{
		timeUS:   l.startS()*1e6 + int64(pulse)*1e6/pulsesPerS,
		line:     l.number,
		bed:      bed,
		apparent: s.light.apparent(coveSurface, origin, bed).round(1e3),
		lost:     pulse%lostEvery == lostEvery/2,
		depth:    levelM - bed.z,
		remark:   remark(bed.x, bed.y),
	}
	shot.intensity = intensity(s.random, shot.depth)
	shot.outcome = s.outcome(&shot, l.hasOrigin(pulse))
	return shot
}

// aim returns the place that a pulse finds, some way to the left or right.
func (s *shooter) aim(l *flightLine, origin vec, pulse int) vec {
	bed := origin.plus((origin.z-levelM)*sweep(s.random, pulse), l.heading.left())
	bed.z = bedZ(bed.x, bed.y)
	return bed
}

// sweep returns how far to the left a pulse goes over how far down.
func sweep(random *rand.Rand, pulse int) float64 {
	part := (float64(pulse%sweepPulses) + 0.5) / sweepPulses
	if pulse/sweepPulses%2 == 1 {
		part = 1 - part
	}
	offNadirDeg := edgeDeg*(2*part-1) + jitterDeg*(2*random.Float64()-1)
	return math.Tan(offNadirDeg * math.Pi / 180)
}

// intensity fades with depth.
func intensity(random *rand.Rand, depth float64) int {
	return int(300+1500*math.Exp(-max(depth, 0)/4)) + random.IntN(100)
}

// outcome names what should become of a shot. The first that applies.
func (s *shooter) outcome(shot *shot, hasOrigin bool) string {
	p := shot.apparent
	switch {
	case shot.lost:
		return "invalid"
	case !s.outline.holds(p.x, p.y) || s.hole.holds(p.x, p.y):
		return "outside"
	case p.z >= levelM:
		return "dry"
	case !hasOrigin:
		return "no_origin"
	}
	return "corrected"
}
