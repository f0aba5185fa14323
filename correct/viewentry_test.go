package correct_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"bentray/correct"
)

func (p *photos) entryPlan(points []int32, at correct.XYZ) (x, y []float64) {
	x, y = make([]float64, len(p.bundle.Camera)), make([]float64, len(p.bundle.Camera))
	p.solver.EntryPlan(x, y, p.out, points, p.raw, at, &p.bundle)
	return x, y
}

// The rays traced to the true point cross where the light of the simulation did.
func TestViewEntries(t *testing.T) {
	for name, offset := range map[string]vec{"near": noOffset, "7 million metres north": {5e5, 7e6, 0}} {
		t.Run(name, func(t *testing.T) {
			p := simulatePhotos(100, networks["strip"], correct.Equal, 45, 0.05, true, offset)
			x, y := p.entryPlan(nil, p.truth)
			for i, s := range p.scenes {
				for k := range s.cameras {
					entry, ray := s.entry(k), int(p.bundle.Start[i])+k
					near(t, "x", x[ray], entry[0]+offset[0], 5e-9)
					near(t, "y", y[ray], entry[1]+offset[1], 5e-9)
				}
			}
		})
	}
}

// Straight rays: the place on the line from camera to raw point that is on the plane.
func TestViewEntriesOfStraightRays(t *testing.T) {
	for _, solve := range []correct.Solve{correct.Intersect, correct.Average} {
		p := simulatePhotos(100, networks["ring"], correct.Equal, 45, 0.05, true, noOffset)
		p.bundle.Solve = solve
		x, y := p.entryPlan(nil, p.truth)
		for i, s := range p.scenes {
			raw := vec{p.raw.X[i], p.raw.Y[i], p.raw.Z[i]}
			for k, c := range s.cameras {
				above, below := c[2]-s.waters[k].at(c[0], c[1]), s.waters[k].at(raw[0], raw[1])-raw[2]
				entry := raw.plus(below/(above+below), c.plus(-1, raw))
				near(t, "x", x[int(p.bundle.Start[i])+k], entry[0], 1e-12)
				near(t, "y", y[int(p.bundle.Start[i])+k], entry[1], 1e-12)
			}
		}
	}
}

// Rays without an entry, and those of points that are not Corrected, have the raw position.
func TestViewEntriesMissing(t *testing.T) {
	for name, spoil := range map[string]func(p *photos, b *correct.Bundle){
		"not corrected":        func(p *photos, b *correct.Bundle) { p.out[0] = correct.Grazing },
		"no index":             func(p *photos, b *correct.Bundle) { b.Light.Water[0] = nan },
		"no surface":           func(p *photos, b *correct.Bundle) { b.Planes.Level[1] = nan },
		"camera in water":      func(p *photos, b *correct.Bundle) { b.Cameras.Z[1] = 0 },
		"point above":          func(p *photos, b *correct.Bundle) { p.truth.Z[0] = 1 },
		"straight ray upwards": func(p *photos, b *correct.Bundle) { p.raw.Z[0], b.Solve = 99, correct.Intersect },
		"point on no place":    func(p *photos, b *correct.Bundle) { p.truth.X[0] = nan; p.truth.Z[0] = nan },
	} {
		t.Run(name, func(t *testing.T) {
			p := onePhoto()
			spoil(p, &p.bundle)
			if x, y := p.entryPlan(nil, p.truth); x[1] != p.raw.X[0] || y[1] != p.raw.Y[0] {
				t.Errorf("the entry is %g %g, want the raw position %g %g", x[1], y[1], p.raw.X[0], p.raw.Y[0])
			}
		})
	}
}

// swell is a curved surface: waves of 0.1 m height and 25 m length, two ways.
func swell(x, y float64) water {
	k := 2 * math.Pi / 25
	w := water{air: 1, waterPhase: 1.34, sx: 0.05 * k * math.Cos(k*x), sy: -0.05 * k * math.Sin(k*y)}
	w.level = 0.05*math.Sin(k*x) + 0.05*math.Cos(k*y) - w.sx*x - w.sy*y
	return w
}

// swellScene returns a point under the swell. Each ray's plane touches the swell at
// the ray's entry.
func swellScene(r *rand.Rand) *scene {
	s := &scene{truth: vec{9 * r.NormFloat64(), 9 * r.NormFloat64(), -1 - 4*r.Float64()}}
	for _, c := range networks["ring"](r, 50, 0.5) {
		x, y := s.truth[0], s.truth[1]
		for range 60 {
			entry := swell(x, y).entry(c, s.truth)
			x, y = entry[0], entry[1]
		}
		s.cameras, s.waters, s.rotations = append(s.cameras, c), append(s.waters, swell(x, y)), append(s.rotations, rotation{})
	}
	s.shoot()
	return s
}

// takeSwell takes the planes of the listed points' rays at x, y.
func (p *photos) takeSwell(points []int32, x, y []float64) {
	b := &p.bundle
	for _, i := range points {
		for k := b.Start[i]; k < b.Start[i+1]; k++ {
			w := swell(x[k], y[k])
			b.Planes.Level[k], b.Planes.SlopeX[k], b.Planes.SlopeY[k] = w.at(x[k], y[k]), w.sx, w.sy
		}
	}
	b.CarryToRaw(b.Planes, points, p.raw, x, y)
}

// A curved surface, as a caller meets it: planes at the raw position, then at the entries of
// the straight rays, then at those of each solution, only for points that still move.
func TestInvertUnderSwell(t *testing.T) {
	const n = 50
	r := rand.New(rand.NewPCG(seed, n))
	p := newPhotos(1)
	p.bundle.Residual = correct.Angle
	var points []int32
	for i := range n {
		s := swellScene(r)
		p.add(s, s.triangulate(correct.Angle, s.truth), noOffset)
		points = append(points, int32(i))
	}
	b := &p.bundle
	lastX, lastY := make([]float64, len(b.Camera)), make([]float64, len(b.Camera))
	for i := range n {
		for k := b.Start[i]; k < b.Start[i+1]; k++ {
			lastX[k], lastY[k] = p.raw.X[i], p.raw.Y[i]
		}
	}
	p.takeSwell(points, lastX, lastY)
	b.Solve = correct.Intersect
	lastX, lastY = p.entryPlan(points, p.raw)
	b.Solve = correct.Invert
	tries := 0
	for ; len(points) > 0 && tries < 20; tries++ {
		p.takeSwell(points, lastX, lastY)
		p.solver.Solve(&p.dst, p.out, points, p.raw, b)
		b.Warm = true
		x, y := p.entryPlan(points, p.dst.XYZ)
		var moving []int32
		for _, i := range points {
			for k := b.Start[i]; k < b.Start[i+1]; k++ {
				if math.Hypot(x[k]-lastX[k], y[k]-lastY[k]) > 1e-7 {
					moving = append(moving, i)
					break
				}
			}
		}
		points, lastX, lastY = moving, x, y
	}
	if len(points) > 0 {
		t.Fatalf("seed %d: %d points still move", seed, len(points))
	}
	t.Logf("%d tries", tries)
	p.checkTruth(t, 1e-6)
}
