package demo

import (
	"math"
	"math/rand/v2"
)

const (
	riverEvery = 2    // of the pulses one is fired
	edgeM      = 0.02 // water and land nearer to the level than this send nothing back
)

// riverShooter fires the pulses over the river. Equal seeds give equal pulses.
type riverShooter struct {
	waters []water
	lights []light // one a water
	random *rand.Rand
}

func newRiverShooter() (*riverShooter, error) {
	s := &riverShooter{waters: riverWaters(), random: rand.New(rand.NewPCG(13, 532))}
	for _, w := range s.waters {
		l, err := newLight(w.temperatureC, w.salinity, laserNM)
		if err != nil {
			return nil, err
		}
		s.lights = append(s.lights, l)
	}
	return s, nil
}

// fire sends one pulse of a line; false where nothing comes back.
func (s *riverShooter) fire(l *flightLine, pulse int) (shot, bool) {
	origin := l.origin(pulse)
	bed := origin.plus((origin.z-riverSurface.at.z)*sweep(s.random, pulse), l.heading.left())
	bed.z = riverBedZ(bed.x, bed.y)
	shot := shot{timeUS: l.startS()*1e6 + int64(pulse)*1e6/pulsesPerS, line: l.number, bed: bed}
	rise, told := riseAt(shot.timeUS)
	if !s.see(&shot, origin, rise) {
		return shot, false
	}
	shot.intensity = intensity(s.random, shot.depth)
	switch {
	case !told:
		shot.outcome = "no_surface"
	case shot.depth < 0:
		shot.outcome = "dry"
	default:
		shot.outcome = "corrected"
	}
	return shot, true
}

// see sets where the cloud has the bed, seen through the water that is there; false
// at the water's edge, and where the apparent point lies in another water than its
// ray went through, as on the line where salt water begins.
func (s *riverShooter) see(shot *shot, origin vec, rise float64) bool {
	for k := range s.waters {
		surface := s.waters[k].surface
		surface.at.z += rise
		shot.depth = surface.z(shot.bed.x, shot.bed.y) - shot.bed.z
		shot.apparent = s.lights[k].apparent(surface, origin, shot.bed).round(1e3)
		if waterAt(s.waters, shot.apparent.x, shot.apparent.y) == k {
			shot.remark = s.waters[k].name
			return math.Abs(shot.depth) >= edgeM
		}
	}
	return false
}
