package correct_test

import (
	"math"
	"math/rand/v2"

	"bentray/correct"
	"bentray/correct/optics"
)

// An independent simulation of cameras behind a flat port: the light's path by the root of the
// derivative of its travel time through three media, and pinholes that absorb the port
// by their definition. It shares no code and no formula with the kernel.

// rig is the port of all cameras: gas, glass and water; lengths in metres.
type rig struct {
	distance, glass        float64 // pupil to inner face along the axis; thickness
	gas, pane, water       float64 // indices
	tiltX, tiltY           float64 // radians
	calibration            float64 // in front of the outer face; 0 = in air
	leastM                 float64 // put in place of a length of 0, which the travel time cannot have
	tanIncidence, tanWater float64 // of the last ray
}

// inObject returns v of the camera's axes in those of the object: R v.
func (r rotation) inObject(v vec) vec {
	return vec{r[0]*v[0] + r[1]*v[1] + r[2]*v[2], r[3]*v[0] + r[4]*v[1] + r[5]*v[2], r[6]*v[0] + r[7]*v[1] + r[8]*v[2]}
}

// normal turns 0 0 1 about y by tiltY and then about x by tiltX.
func (g *rig) normal() vec {
	v := vec{math.Sin(g.tiltY), 0, math.Cos(g.tiltY)}
	return vec{v[0], -math.Sin(g.tiltX) * v[2], math.Cos(g.tiltX) * v[2]}
}

// inner returns the way from the pupil to the glass along the normal.
func (g *rig) inner() float64 { return max(g.distance*g.normal()[2], g.leastM) }

// faces returns where the light from the pupil to a point, beyond the outer face and aside by
// span, crosses the two faces: the times' derivatives by both places are 0.
func (g *rig) faces(beyond, span float64) (a, b float64) {
	slow := func(n, along, aside float64) float64 { return n * aside / math.Hypot(along, aside) }
	root := func(low, high float64, falls func(x float64) bool) float64 {
		for range 60 {
			mid := (low + high) / 2
			if falls(mid) {
				low = mid
			} else {
				high = mid
			}
		}
		return low
	}
	glass := max(g.glass, g.leastM)
	outer := func(a float64) float64 {
		return root(a, span, func(b float64) bool { return slow(g.pane, glass, b-a) < slow(g.water, beyond, span-b) })
	}
	a = root(0, span, func(a float64) bool {
		return slow(g.gas, g.inner(), a) < slow(g.pane, glass, outer(a)-a)
	})
	return a, outer(a)
}

// centre returns how far the centre of the pinhole is behind the outer face: where rays near
// the normal, prolonged from the water, meet it. Any distance of the point gives the same.
func (g *rig) centre() float64 {
	if g.calibration == 0 {
		return g.inner() + g.glass
	}
	const span = 1e-5
	_, b := g.faces(1, span)
	return b / (span - b)
}

// shoot takes the raw directions of the scene's cameras, which are the pinholes' centres.
func (g *rig) shoot(s *scene) {
	s.dirs = s.dirs[:0]
	centre := g.centre()
	for k, c := range s.cameras {
		up := s.rotations[k].inObject(g.normal())
		down := c.plus(-1, s.truth)
		beyond := down.dot(up) - centre
		side := down.plus(-down.dot(up), up)
		span := side.length()
		a, b := g.faces(beyond, span)
		g.tanIncidence, g.tanWater = a/g.inner(), (span-b)/beyond
		tan := g.tanIncidence
		if g.calibration != 0 {
			tan = (b + g.calibration*g.tanWater) / (g.calibration + centre)
		}
		dir := up.plus(-2, up)
		if span > 0 {
			dir = dir.plus(-tan/span, side)
		}
		s.dirs = append(s.dirs, dir)
	}
}

func (g *rig) port() *correct.Port {
	return &correct.Port{
		DistanceM: g.distance, Panes: []optics.Layer{{ThicknessM: g.glass, Index: g.pane}},
		Normal: correct.PortNormal(g.tiltX, g.tiltY), CalibrationM: g.calibration,
	}
}

// scene returns a point seen by three cameras from 0.6 to 4 m, turned anyhow, some 40
// degrees off their axes at most.
func (g *rig) scene(r *rand.Rand) *scene {
	s := &scene{truth: vec{r.NormFloat64(), r.NormFloat64(), r.NormFloat64()}}
	turn := 2 * math.Pi * r.Float64()
	for k := range 3 {
		turn += 0.4 + 0.4*r.Float64()
		away := vec{math.Cos(turn), math.Sin(turn), -0.5 + 0.4*float64(k)}.unit()
		far := 0.6 + 3.4*r.Float64()
		aim := away.plus(-2, away).plus(0.4*r.Float64(), vec{r.NormFloat64(), r.NormFloat64(), r.NormFloat64()}.unit())
		s.cameras = append(s.cameras, s.truth.plus(far, away))
		s.rotations = append(s.rotations, lookAlong(aim, 6*r.Float64()))
	}
	g.shoot(s)
	return s
}

// dive returns the points of scenes as a cloud.
func (g *rig) dive(rule correct.Residual, offset vec, scenes ...*scene) *photos {
	p := newPhotos(g.gas)
	b := &p.bundle
	b.Port, b.Residual = g.port(), rule
	push := func(to *correct.XYZ, v vec) {
		to.X, to.Y, to.Z = append(to.X, v[0]+offset[0]), append(to.Y, v[1]+offset[1]), append(to.Z, v[2]+offset[2])
	}
	for _, s := range scenes {
		push(&p.truth, s.truth)
		push(&p.raw, s.triangulate(rule, s.truth))
		for k, c := range s.cameras {
			b.Camera = append(b.Camera, int32(len(b.Cameras.X)))
			push(&b.Cameras.XYZ, c)
			b.Cameras.Rotation = append(b.Cameras.Rotation, s.rotations[k])
		}
		b.Start = append(b.Start, int32(len(b.Camera)))
		b.Light.Water = append(b.Light.Water, g.water)
		p.out = append(p.out, correct.Corrected)
	}
	p.scenes, p.dst = scenes, correct.NewResult(len(p.out))
	return p
}

func (g *rig) scenes(n int) []*scene {
	r := rand.New(rand.NewPCG(seed, uint64(300+n)))
	var scenes []*scene
	for range n {
		scenes = append(scenes, g.scene(r))
	}
	return scenes
}

func (g *rig) random(n int, rule correct.Residual, offset vec) *photos {
	return g.dive(rule, offset, g.scenes(n)...)
}

// look corrects the points.
func (p *photos) look() {
	correct.MarkInvalid(p.out, p.raw)
	correct.MarkNoCameras(p.out, p.raw, &p.bundle)
	p.solver.Solve(&p.dst, p.out, nil, p.raw, &p.bundle)
}

// aside returns the run of light with the tangent tan in the housing, to a way beyond the
// outer face.
func (g *rig) aside(beyond, tan float64) float64 {
	sin := g.gas * tan / math.Hypot(1, tan)
	return g.inner()*tan + g.glass*sin/math.Sqrt(g.pane*g.pane-sin*sin) + beyond*sin/math.Sqrt(g.water*g.water-sin*sin)
}

// ring returns four cameras that look straight down at a point from where their light has the
// tangent tan in the housing and the outer faces are beyond above it. All rays meet on
// the axis of the ring.
func (g *rig) ring(beyond, tan float64) *scene {
	away := g.aside(beyond, tan)
	s := &scene{truth: vec{0.3, -0.2, 0.1}}
	for k := range 4 {
		turn := 0.3 + math.Pi/2*float64(k)
		s.cameras = append(s.cameras, s.truth.plus(1, vec{away * math.Cos(turn), away * math.Sin(turn), beyond + g.centre()}))
		s.rotations = append(s.rotations, rotation{1, 0, 0, 0, 1, 0, 0, 0, 1})
	}
	g.shoot(s)
	return s
}
