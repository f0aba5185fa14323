package demo

import "math"

// Errors sums up how far points lie from the truth, in metres. In z an error is
// found minus true, so that below 0 is too deep; in plan it is a distance.
type Errors struct {
	ZBias, ZRMS, ZMax          float64 // mean, root mean square, largest magnitude
	PlanMean, PlanRMS, PlanMax float64
}

// Band is the points of a band of true depths, and their errors before and
// after the correction.
type Band struct {
	From, To       float64 // m, From <= depth < To
	Points         int64
	Raw, Corrected Errors
}

// spread adds up errors.
type spread struct {
	count                                         int64
	z, zSquared, zMax, plan, planSquared, planMax float64
}

func (s *spread) add(found, truth vec) {
	way := found.minus(truth)
	plan := math.Hypot(way.x, way.y)
	s.count++
	s.z += way.z
	s.zSquared += way.z * way.z
	s.zMax = max(s.zMax, math.Abs(way.z))
	s.plan += plan
	s.planSquared += plan * plan
	s.planMax = max(s.planMax, plan)
}

func (s *spread) join(o *spread) {
	s.count += o.count
	s.z += o.z
	s.zSquared += o.zSquared
	s.zMax = max(s.zMax, o.zMax)
	s.plan += o.plan
	s.planSquared += o.planSquared
	s.planMax = max(s.planMax, o.planMax)
}

// errors returns the sum; all 0 without points.
func (s *spread) errors() Errors {
	if s.count == 0 {
		return Errors{}
	}
	n := float64(s.count)
	return Errors{
		ZBias: s.z / n, ZRMS: math.Sqrt(s.zSquared / n), ZMax: s.zMax,
		PlanMean: s.plan / n, PlanRMS: math.Sqrt(s.planSquared / n), PlanMax: s.planMax,
	}
}

// bands are the errors of bands of depth from 0 down.
type bands struct {
	step float64 // m, the thickness of a band
	each []struct{ raw, corrected spread }
}

func (b *bands) add(depth float64, raw, corrected, truth vec) {
	i := int(max(depth, 0) / b.step)
	for len(b.each) <= i {
		b.each = append(b.each, struct{ raw, corrected spread }{})
	}
	b.each[i].raw.add(raw, truth)
	b.each[i].corrected.add(corrected, truth)
}

// report returns each band and all of them as one.
func (b *bands) report() (each []Band, all Band) {
	var raw, corrected spread
	for i := range b.each {
		each = append(each, b.band(i, i+1, &b.each[i].raw, &b.each[i].corrected))
		raw.join(&b.each[i].raw)
		corrected.join(&b.each[i].corrected)
	}
	return each, b.band(0, len(b.each), &raw, &corrected)
}

func (b *bands) band(from, to int, raw, corrected *spread) Band {
	return Band{From: float64(from) * b.step, To: float64(to) * b.step, Points: raw.count, Raw: raw.errors(), Corrected: corrected.errors()}
}
