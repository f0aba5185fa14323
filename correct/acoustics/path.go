package acoustics

import "math"

// Path is the way of sound between two points.
type Path struct {
	Sin, Cos float64 // of the launch angle from the downward vertical
	TimeS    float64 // travel time, s
	Turned   bool    // it goes through a vertex
}

// Between returns the path from one depth to another, metres below the water level, over a
// horizontal distance runM, metres, not negative. Depths are 0 to 12000 m.
//
// It is the direct path where there is one: down or up all the way, or along a layer of constant
// speed. Else it turns once, below both points or above both; of several such paths it is the one with the
// nearest vertex below or that above, whichever is quicker. The result is false where
// there is none, where numbers are out of range, and for two equal points. A path that exists
// may be missed if it turns more than once, or in a layer where two paths do.
//
// The unknown of the direct path is s = tan(th) / c at the fastest place of the way, m the
// speed there. With q(c) = sqrt(1 + s^2 (m^2 - c^2)) a layer of thickness z and speeds c0, c1 adds
//
//	run         s z (c0 + c1) / (q0 + q1)
//	derivative  z (c0 + c1) / ((q0 + q1) q0 q1)
//
// The run R is increasing and concave in s, and 1 / R^2 is so in 1 / s^2 (a power mean), of
// which it is all but a linear function: at one speed it is one. Newton's method is used
// on that, and where it would step beyond the horizontal, on R itself, which cannot.
func (p *Profile) Between(fromM, toM, runM float64) (Path, bool) {
	if !(fromM >= 0 && fromM <= deepestM && toM >= 0 && toM <= deepestM && runM >= 0 && runM <= math.MaxFloat64) {
		return Path{}, false
	}
	if math.Abs(fromM-toM) <= levelRatio*runM {
		return p.level(fromM, runM)
	}
	w := p.way(fromM, toM)
	if path, ok := w.direct(runM); ok {
		return path, true
	}
	return p.turning(fromM, toM, runM)
}

// level returns the path between points of one depth.
func (p *Profile) level(depth, run float64) (Path, bool) {
	l := &p.layers[p.layerAt(depth)]
	if l.gradient == 0 {
		return Path{Sin: 1, TimeS: run / l.c0}, run > 0
	}
	return p.turning(depth, depth, run)
}

// way is a stretch of depth, cut into the layers it crosses. Its ends, where they are
// boundaries, belong to these layers.
type way struct {
	layers        []layer
	first, last   int
	top, bottom   float64
	cTop, cBottom float64 // speeds there
	fastest       float64 // speed on it
	isUp          bool    // it leads up
}

func (p *Profile) way(from, to float64) way {
	w := way{layers: p.layers, top: min(from, to), bottom: max(from, to), isUp: from > to}
	w.first = p.layerAt(w.top)
	w.last = max(w.first, p.layerAbove(w.bottom))
	w.cTop, w.cBottom = p.layers[w.first].speed(w.top), p.layers[w.last].speed(w.bottom)
	w.fastest = max(w.cTop, w.cBottom)
	for i := w.first; i < w.last; i++ {
		if c := p.layers[i].c1; c > w.fastest {
			w.fastest = c
		}
		if c := p.layers[i+1].c0; c > w.fastest {
			w.fastest = c
		}
	}
	return w
}

// piece returns the thickness of the way's part in layer i and the speeds at its top and bottom.
func (w *way) piece(i int) (z, c0, c1 float64) {
	l := &w.layers[i]
	top, bottom, c0, c1 := l.top, l.bottom, l.c0, l.c1
	if i == w.first {
		top, c0 = w.top, w.cTop
	}
	if i == w.last {
		bottom, c1 = w.bottom, w.cBottom
	}
	return bottom - top, c0, c1
}

const (
	newtonSteps = 60
	enough      = 1e-6  // relative step; what it leaves is of the order of its square
	flattest    = 1e14  // tangent at the fastest place, beyond which there is no direct path
	levelRatio  = 1e-12 // of depth to run, below which points are of one depth
	nearM       = 1e-9  // what the flattest path may miss, metres
)

// direct returns the path that does not turn.
func (w *way) direct(run float64) (Path, bool) {
	if run == 0 {
		return w.slanted(0), true
	}
	s := run / ((w.bottom - w.top) * w.fastest)
	for range newtonSteps {
		last := s
		s = w.nearer(s, run)
		if !(s*w.fastest < flattest) {
			break
		}
		if math.Abs(s-last) <= enough*s {
			return w.slanted(s), true
		}
	}
	s = flattest / w.fastest
	got, _ := w.reach(s)
	return w.slanted(s), math.Abs(got-run) <= nearM
}

// nearer returns the unknown after a step from s.
func (w *way) nearer(s, run float64) float64 {
	got, slope := w.reach(s)
	ratio := got / run
	if squared := 1 + (ratio*ratio-1)*got/(slope*s); squared > 0 {
		return s / math.Sqrt(squared)
	}
	return s + (run-got)/slope
}

// reach returns the run of the direct path of unknown s, and its derivative.
func (w *way) reach(s float64) (run, slope float64) {
	s2, m := s*s, w.fastest
	c, q0 := 0.0, 0.0
	for i := w.first; i <= w.last; i++ {
		z, c0, c1 := w.piece(i)
		if c0 != c {
			q0 = math.Sqrt(1 + s2*((m-c0)*(m+c0)))
		}
		q1 := math.Sqrt(1 + s2*((m-c1)*(m+c1)))
		q := q0 * q1
		share := z * (c0 + c1) / ((q0 + q1) * q)
		run += share * q
		slope += share
		c, q0 = c1, q1
	}
	return s * run, slope
}

// slanted returns the direct path of unknown s.
func (w *way) slanted(s float64) Path {
	secant2 := 1 + s*s*w.fastest*w.fastest
	ray := pencil{m: w.fastest, base: 1 / secant2, p2: s * s / secant2}
	c := w.cTop
	if w.isUp {
		c = w.cBottom
	}
	path := Path{Sin: math.Sqrt(ray.p2) * c, Cos: ray.cos(c)}
	if w.isUp {
		path.Cos = -path.Cos
	}
	path.TimeS, _ = w.spend(&ray)
	return path
}

// pencil is a ray by its parameter: p2 is p^2, and base the squared cosine where the speed is m.
// Neither is the difference of nearly equal numbers, so its cosines are exact near the horizontal.
type pencil struct{ m, base, p2 float64 }

// cos returns the absolute cosine where the speed is c.
func (r *pencil) cos(c float64) float64 {
	square := r.base + r.p2*((r.m-c)*(r.m+c))
	if square < 0 { // by rounding, at the vertex
		return 0
	}
	return math.Sqrt(square)
}

// spend returns the time and the run of a ray along the way.
func (w *way) spend(r *pencil) (time, run float64) {
	c, k0 := 0.0, 0.0
	for i := w.first; i <= w.last; i++ {
		z, c0, c1 := w.piece(i)
		if z == 0 {
			continue
		}
		if c0 != c {
			k0 = r.cos(c0)
		}
		k1 := r.cos(c1)
		x := crossing(z, c0, c1, k0, k1, r.p2)
		time += x.time * atanhRatio(w.layers[i].gradient*x.time)
		run += x.run
		c, k0 = c1, k1
	}
	return time, run * math.Sqrt(r.p2)
}
