package acoustics

import "math"

// Fate says how a traced ray ended.
type Fate uint8

// The fates.
const (
	Arrived  Fate = iota // its time is spent
	Surfaced             // it met the water surface before
	NoRay                // there is no such ray: see Trace
)

// Arrival is where a ray is when its time is spent.
type Arrival struct {
	RunM     float64 // horizontal distance from the start, metres, positive
	DepthM   float64 // below the water level, metres
	Sin, Cos float64 // of its angle from the downward vertical
	Speed    float64 // of sound there, m/s
	Turned   bool    // it went from down to up, or back, at least once
	Beyond   bool    // it began or ended below the last of several samples
	Fate     Fate
}

// Trace follows a ray that leaves depthM, metres below the water level, at an angle
// from the downward vertical of the given sine and cosine (unit length together, the sine
// not negative; up is a negative cosine) for the travel time timeS, seconds. A ray that
// turns is followed through its turn. One that is totally reflected at a step of the speed
// turns there. Of a ray that is not Arrived only the fate means anything. A depth or a time that
// is negative, NaN or infinite, and a direction that is none, have NoRay.
//
// p = sin / c is constant along the ray. With the cosines k0 and k1 at its ends, a crossed
// layer of thickness z takes
//
//	run   z p (c0 + c1) / (k0 + k1)
//	time  atanh(g w) / g,  w = z (c0 + c1) (1 + k0 k1) / ((k0 + k1) (c0^2 + c1^2 - p^2 c0^2 c1^2))
//
// which is what (k0 - k1) / (p g) and ln(tan(th1/2) / tan(th0/2)) / g become when the differences
// that cancel are multiplied out: no gradient is too small, none needs p > 0.
func (p *Profile) Trace(depthM, sin, cos, timeS float64) Arrival {
	if !(depthM >= 0 && depthM <= deepestM && timeS >= 0 && timeS <= math.MaxFloat64) || !isDirection(sin, cos) {
		return Arrival{Fate: NoRay}
	}
	w := p.start(depthM, sin, cos)
	w.left = timeS
	for w.glide() && w.turnBack() {
	}
	a := w.arrival()
	a.Beyond = len(p.samples) > 1 && max(depthM, a.DepthM) > p.LastM()
	return a
}

func isDirection(sin, cos float64) bool { return sin >= 0 && math.Abs(sin*sin+cos*cos-1) < 1e-9 }

// walk is a ray on its way. Its cosine at a speed c follows from the start, where it
// is exact: k^2 = k0^2 - p^2 (c^2 - c0^2).
type walk struct {
	profile *Profile
	layer   int
	isDown  bool
	depth   float64
	c, k    float64 // speed and absolute cosine here
	p, p2   float64 // ray parameter, s/m, and its square
	c0, k02 float64 // speed and squared cosine at the start
	run     float64
	left    float64 // time to go, s
	turned  bool
	isOut   bool // at the surface with time left
	top     mark // where it turned from up to down
}

// start returns the walk from a depth. A horizontal ray goes to where the speed is lower.
func (p *Profile) start(depth, sin, cos float64) walk {
	i := p.layerAt(depth)
	isDown := cos > 0 || cos == 0 && p.layers[i].gradient <= 0
	if !isDown {
		i = p.layerAbove(depth)
	}
	c := p.layers[i].speed(depth)
	w := walk{profile: p, layer: i, isDown: isDown, depth: depth, c: c, k: math.Abs(cos), p: sin / c, c0: c, k02: cos * cos}
	w.p2 = w.p * w.p
	return w
}

// glide takes the ray from layer to layer, until it must turn back (true) or its time or the water
// ends (false).
func (w *walk) glide() bool {
	layers, isDown, p2 := w.profile.layers, w.isDown, w.p2
	depth, c, k, run, left := w.depth, w.c, w.k, 0.0, w.left
	end := spent
	for i := w.layer; ; w.layer = i {
		l := &layers[i]
		z, to := l.bottom-depth, l.c1
		if !isDown {
			z, to = depth-l.top, l.c0
		}
		square := w.square(to)
		if square <= 0 {
			end = curved
			break
		}
		k1 := math.Sqrt(square)
		x := crossing(z, c, to, k, k1, p2)
		t := x.time * atanhRatio(l.gradient*x.time)
		if !(t < left) {
			break
		}
		left -= t
		run += x.run
		c, k = to, k1
		var entry float64
		if isDown {
			i, depth = i+1, l.bottom
			entry = layers[i].c0
		} else if i, depth = i-1, l.top; i < 0 {
			end = surfaced
			break
		} else {
			entry = layers[i].c1
		}
		if entry != c {
			if square = w.square(entry); square <= 0 {
				end = reflected
				break
			}
			c, k = entry, math.Sqrt(square)
		}
	}
	w.depth, w.c, w.k, w.run, w.left = depth, c, k, w.run+run*w.p, left
	w.isOut = end == surfaced
	return end == reflected || end == curved && w.pass()
}

// How a glide ends.
const (
	spent     = iota // within w.layer
	surfaced         // at the water surface
	reflected        // at the far side of w.layer, from the faster layer behind it
	curved           // in w.layer, where it has a vertex
)

// square returns the squared cosine where the speed is c.
func (w *walk) square(c float64) float64 { return w.k02 - w.p2*((c-w.c0)*(c+w.c0)) }

// pass takes the ray through its vertex in the layer to the depth where it is, if there is
// time for it.
func (w *walk) pass() bool {
	g := math.Abs(w.profile.layers[w.layer].gradient)
	t := 2 * math.Atanh(w.k) / g
	if !(t < w.left) {
		return false
	}
	w.left -= t
	w.run += 2 * w.k / (w.p * g)
	return true
}

// turnBack reverses the ray. From one turn down to the next it repeats itself, so whole periods
// are taken at once: a ray near an axis of low speed might else turn without end.
func (w *walk) turnBack() bool {
	w.isDown, w.turned = !w.isDown, true
	if w.isDown {
		w.skipPeriods()
	}
	return w.left > 0
}

// mark is what a walk was when it turned.
type mark struct {
	isSet     bool
	run, left float64
}

func (w *walk) skipPeriods() {
	last := w.top
	w.top = mark{!last.isSet, w.run, w.left}
	if !last.isSet {
		return
	}
	time, run := last.left-w.left, w.run-last.run
	if time == 0 { // it runs along the axis
		w.run += w.c * w.left
		w.left = 0
		return
	}
	n := math.Floor(w.left / time)
	w.left -= n * time
	w.run += n * run
}

// arrival spends the time that is left inside the layer.
func (w *walk) arrival() Arrival {
	if w.isOut {
		return Arrival{Fate: Surfaced}
	}
	l, k := &w.profile.layers[w.layer], w.k
	if !w.isDown {
		k = -k
	}
	run, z := within(w.left, w.c, k, w.p, l.gradient)
	speed, cos := w.c+l.gradient*z, k-w.p*l.gradient*run
	return Arrival{
		RunM: w.run + run, DepthM: w.depth + z, Speed: speed,
		Sin: w.p * speed, Cos: cos, Turned: w.turned || k*cos < 0,
	}
}
