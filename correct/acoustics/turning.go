package acoustics

import "math"

// turning returns the quicker of the paths between two depths that turn once, below both
// or above both.
func (p *Profile) turning(from, to, run float64) (Path, bool) {
	down, isDown := p.turn(from, to, run, false)
	up, isUp := p.turn(from, to, run, true)
	isDown = isDown && p.leads(down, from, to, run)
	isUp = isUp && p.leads(up, from, to, run)
	if isUp && !(isDown && down.TimeS <= up.TimeS) {
		return up, true
	}
	return down, isDown
}

// leads reports whether a path leads where it should, within a micrometre. One that grazes a maximum
// of the speed, and would run elsewhere for a change in its last digits, does not.
func (p *Profile) leads(path Path, from, to, run float64) bool {
	a := p.Trace(from, path.Sin, path.Cos, path.TimeS)
	return a.Fate == Arrived && math.Hypot(a.RunM-run, a.DepthM-to) < 1e-6
}

// turn returns the path with the nearest vertex above or below. A ray whose 1/p is a speed that no
// nearer place has turns where the speed is reached. So it goes out from the outer one of
// the points and tries the speeds that each layer adds to the record: by a jump where it
// begins, and by its gradient.
func (p *Profile) turn(from, to, run float64, isUp bool) (Path, bool) {
	outer := max(from, to)
	i, step := p.layerAt(outer), 1
	if isUp {
		outer = min(from, to)
		i, step = p.layerAbove(outer), -1
	}
	v := vertex{between: p.way(from, to), run: run}
	record := p.layers[i].speed(outer)
	if from != to {
		record = max(record, v.between.fastest)
	}
	for ; i >= 0 && i < len(p.layers)-1; i += step {
		l := &p.layers[i]
		near, far := max(outer, l.top), l.c1
		if isUp {
			near, far = min(outer, l.bottom), l.c0
		}
		v.legs, v.speed = p.way(outer, near), l.speed(near)
		if e, ok := v.solve(record, v.speed, 0); ok {
			return p.launch(&v, record, e, from, isUp), true
		}
		record = max(record, v.speed)
		if e, ok := v.solve(record, far, l.gradient); ok {
			return p.launch(&v, record, e, from, isUp), true
		}
		record = max(record, far)
	}
	return Path{}, false
}

// vertex is a turn that is sought: in a layer, or where it begins.
type vertex struct {
	between  way     // from one point to the other
	legs     way     // from the outer point to the layer, gone twice
	speed    float64 // where the layer begins
	gradient float64 // in the layer, absolute, 1/s; 0 where the ray turns at its beginning
	run      float64 // wanted
}

// at returns the ray that turns at the speed m + e; e counts, and not the sum, near the
// horizontal.
func at(m, e float64) pencil {
	c := m + e
	return pencil{m: m, base: e * (m + c) / (c * c), p2: 1 / (c * c)}
}

// spend returns the time and the run of a ray.
func (v *vertex) spend(ray *pencil) (time, run float64) {
	time, run = v.legs.spend(ray)
	if v.gradient != 0 {
		k := ray.cos(v.speed)
		time += math.Atanh(k) / v.gradient
		run += k / (v.gradient * math.Sqrt(ray.p2))
	}
	t, x := v.between.spend(ray)
	return t + 2*time, x + 2*run
}

// solve returns by how much the speed at the vertex exceeds m, if it is not more than up to.
// The run grows with the root of the excess, so that is bisected.
func (v *vertex) solve(m, to, gradient float64) (excess float64, ok bool) {
	if !(to > m) {
		return 0, false
	}
	v.gradient = math.Abs(gradient)
	isShort := func(u float64) bool {
		ray := at(m, (to-m)*u*u)
		_, run := v.spend(&ray)
		return run < v.run
	}
	low, high := 0.0, 1.0
	first := isShort(low)
	if first == isShort(high) {
		return 0, false
	}
	for u := 0.5; low < u && u < high; u = (low + high) / 2 {
		if isShort(u) == first {
			low = u
		} else {
			high = u
		}
	}
	return (to - m) * high * high, true
}

// launch returns the path by the vertex whose speed exceeds m by e.
func (p *Profile) launch(v *vertex, m, e, from float64, isUp bool) Path {
	ray := at(m, e)
	c := p.layers[p.layerAt(from)].speed(from)
	if isUp {
		c = p.layers[p.layerAbove(from)].speed(from)
	}
	path := Path{Sin: c * math.Sqrt(ray.p2), Cos: ray.cos(c), Turned: true}
	if isUp {
		path.Cos = -path.Cos
	}
	path.TimeS, _ = v.spend(&ray)
	return path
}
