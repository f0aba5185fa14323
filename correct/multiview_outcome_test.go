package correct_test

import (
	"math"
	"testing"

	"bentray/correct"
)

// onePhoto returns a good point: raw near 0 0 -3 under level water at 0.5, seen by three cameras.
func onePhoto() *photos {
	p := level(vec{0, 0, -4}, vec{-20, 0, 60}, vec{20, 5, 60}, vec{0, -20, 61}).photos(correct.Angle)
	for _, c := range [][]float64{p.planes.Level, p.bundle.Planes.Level, p.raw.Z, p.truth.Z, p.bundle.Cameras.Z} {
		for i := range c {
			c[i] += 0.5
		}
	}
	return p
}

// onlyRays leaves the point its first n rays.
func (p *photos) onlyRays(n int) {
	b := &p.bundle
	b.Start, b.Camera = []int32{0, int32(n)}, b.Camera[:n]
	b.Planes = correct.Planes{Level: b.Planes.Level[:n], SlopeX: b.Planes.SlopeX[:n], SlopeY: b.Planes.SlopeY[:n]}
}

func (p *photos) checkKept(t *testing.T, written ...string) {
	t.Helper()
	s := survey{raw: p.raw, dst: p.dst}
	s.checkKept(t, 0, written...)
}

// Each row spoils a good point in one way; the last rows in several, for precedence.
func TestMultiviewOutcomes(t *testing.T) {
	for _, row := range []struct {
		name  string
		spoil func(p *photos, b *correct.Bundle)
		want  correct.Outcome
	}{
		{"good", func(p *photos, b *correct.Bundle) {}, correct.Corrected},
		{"z NaN", func(p *photos, b *correct.Bundle) { p.raw.Z[0] = nan }, correct.Invalid},
		{"no surface at the point", func(p *photos, b *correct.Bundle) { p.planes.Level[0] = nan }, correct.NoSurface},
		{"no surface for a ray", func(p *photos, b *correct.Bundle) { b.Planes.Level[2] = nan }, correct.NoSurface},
		{"no slope for a ray", func(p *photos, b *correct.Bundle) { b.Planes.SlopeY[0] = inf }, correct.NoSurface},
		{"dry", func(p *photos, b *correct.Bundle) { p.raw.Z[0] = 0.5 }, correct.Dry},
		{"camera NaN", func(p *photos, b *correct.Bundle) { b.Cameras.Y[1] = nan }, correct.NoOrigin},
		{"camera Inf", func(p *photos, b *correct.Bundle) { b.Cameras.Z[1] = inf }, correct.NoOrigin},
		{"camera under water", func(p *photos, b *correct.Bundle) { b.Cameras.Z[2] = 0.4 }, correct.NoOrigin},
		{"camera on the surface", func(p *photos, b *correct.Bundle) { b.Cameras.Z[0] = 0.5 }, correct.NoOrigin},
		{"camera under its tilted plane", func(p *photos, b *correct.Bundle) { b.Planes.SlopeX[1] = 4 }, correct.NoOrigin},
		{"one ray", func(p *photos, b *correct.Bundle) { p.onlyRays(1) }, correct.FewRays},
		{"no rays", func(p *photos, b *correct.Bundle) { p.onlyRays(0) }, correct.FewRays},
		{"beyond the limit", func(p *photos, b *correct.Bundle) { b.MaxIncidenceRad = 0.1 }, correct.Grazing},
		{"limit not a number", func(p *photos, b *correct.Bundle) { b.MaxIncidenceRad = nan }, correct.Grazing},
		{"index 0", func(p *photos, b *correct.Bundle) { b.Light.Water[0] = 0 }, correct.Unsolved},
		{"index NaN", func(p *photos, b *correct.Bundle) { b.Light.Air = nan }, correct.Unsolved},
		{"cameras coincide", func(p *photos, b *correct.Bundle) { b.Camera = []int32{1, 1, 1} }, correct.Unsolved},
		{"cameras in line of sight", func(p *photos, b *correct.Bundle) { p.lineUp() }, correct.Unsolved},
		{"huge", func(p *photos, b *correct.Bundle) { p.raw.Z[0] = -1e300 }, correct.Unsolved},
		{"huge, averaged", func(p *photos, b *correct.Bundle) { p.raw.Z[0], b.Solve = -1.7e308, correct.Average }, correct.Unsolved},
		{"the middle ray alone beyond the limit", func(p *photos, b *correct.Bundle) {
			b.Cameras.X[1], b.Cameras.Z[1], b.MaxIncidenceRad = 70, 50, 0.8
		}, correct.Grazing},
		{"all rays' planes below the point", func(p *photos, b *correct.Bundle) { p.lowerPlanes() }, correct.Unsolved},
		{"so, intersected", func(p *photos, b *correct.Bundle) { p.lowerPlanes(); b.Solve = correct.Intersect }, correct.Unsolved},
		{"so, averaged", func(p *photos, b *correct.Bundle) { p.lowerPlanes(); b.Solve = correct.Average }, correct.Unsolved},
		{"no surface, camera under water", func(p *photos, b *correct.Bundle) {
			b.Planes.Level[2], b.Cameras.Z[0] = nan, -1
		}, correct.NoSurface},
		{"one ray from under water, grazing", func(p *photos, b *correct.Bundle) {
			p.onlyRays(1)
			b.Cameras.Z[0], b.MaxIncidenceRad = -1, 0
		}, correct.NoOrigin},
		{"camera under water, grazing", func(p *photos, b *correct.Bundle) {
			b.Cameras.Z[0], b.MaxIncidenceRad = -1, 0
		}, correct.NoOrigin},
		{"coinciding cameras beyond the limit", func(p *photos, b *correct.Bundle) {
			b.Camera, b.MaxIncidenceRad = []int32{1, 1, 1}, 0.1
		}, correct.Grazing},
		{"no index, beyond the limit", func(p *photos, b *correct.Bundle) {
			b.Light.Water[0], b.MaxIncidenceRad = nan, 0.1
		}, correct.Grazing},
		{"outcome of before", func(p *photos, b *correct.Bundle) { p.out[0] = correct.NoWater }, correct.NoWater},
	} {
		t.Run(row.name, func(t *testing.T) {
			p := onePhoto()
			row.spoil(p, &p.bundle)
			p.solve()
			if p.out[0] != row.want {
				t.Fatalf("outcome is %s, want %s", p.out[0], row.want)
			}
			switch row.want {
			case correct.Corrected:
				p.checkTruth(t, 1e-9)
			case correct.Dry:
				p.checkKept(t, "depth", "water level")
			case correct.Grazing:
				p.checkKept(t, "incidence")
			default:
				p.checkKept(t)
			}
		})
	}
}

// lowerPlanes puts the planes of the rays below the raw point.
func (p *photos) lowerPlanes() {
	for k := range p.bundle.Planes.Level {
		p.bundle.Planes.Level[k] = p.raw.Z[0] - 0.5
	}
}

// lineUp puts all cameras on the first one's raw ray: the rays are parallel.
func (p *photos) lineUp() {
	c := p.bundle.Cameras
	for k := 1; k < len(c.X); k++ {
		share := 1 - 0.1*float64(k)
		c.X[k] = p.raw.X[0] + share*(c.X[0]-p.raw.X[0])
		c.Y[k] = p.raw.Y[0] + share*(c.Y[0]-p.raw.Y[0])
		c.Z[k] = p.raw.Z[0] + share*(c.Z[0]-p.raw.Z[0])
	}
}

func TestMultiviewParallelRays(t *testing.T) {
	for rule, residual := range residuals {
		for _, solve := range []correct.Solve{correct.Invert, correct.Intersect} {
			t.Run(rule, func(t *testing.T) {
				p := onePhoto()
				p.lineUp()
				p.bundle.Residual, p.bundle.Solve = residual, solve
				p.solve()
				if p.out[0] != correct.Unsolved {
					t.Errorf("solve %d: outcome is %s, want unsolved", solve, p.out[0])
				}
				p.checkKept(t)
			})
		}
	}
}

// A camera of the image residual that looks the other way saw nothing.
func TestMultiviewLooksAway(t *testing.T) {
	p := onePhoto()
	p.bundle.Residual = correct.Image
	p.bundle.Cameras.Rotation[1] = rotation{1, 0, 0, 0, -1, 0, 0, 0, -1}
	p.solve()
	if p.out[0] != correct.Unsolved {
		t.Errorf("outcome is %s, want unsolved", p.out[0])
	}
}

// A raw ray from under water beyond the critical angle of 48.3 degrees.
func TestMultiviewTotalReflection(t *testing.T) {
	for _, solve := range []correct.Solve{correct.Invert, correct.Intersect, correct.Average} {
		for _, row := range []struct {
			away float64
			want correct.Outcome
		}{{1, correct.Corrected}, {13, correct.Grazing}} {
			p := newPhotos(1)
			s := level(vec{0, 0, 1}, vec{-1, 0, -4}, vec{0, 1, -4}, vec{row.away, 0, -4})
			p.bundle.Residual, p.bundle.Solve, p.bundle.FromWater = correct.Equal, solve, true
			p.bundle.MaxIncidenceRad = math.Pi / 2
			p.add(s, vec{0, 0, 1.3}, noOffset)
			p.solve()
			if p.out[0] != row.want {
				t.Errorf("solve %d: outcome with a camera %g m away is %s, want %s", solve, row.away, p.out[0], row.want)
			}
		}
	}
}

func TestMarkWet(t *testing.T) {
	p := onePhoto()
	p.bundle.FromWater = true
	for _, row := range []struct {
		z    float64
		want correct.Outcome
	}{{0.4, correct.Dry}, {0.5, correct.Dry}, {0.6, correct.Corrected}, {nan, correct.Corrected}} {
		p.raw.Z[0], p.out[0] = row.z, correct.Corrected
		correct.MarkWet(p.out, &p.dst, p.raw, p.planes)
		if p.out[0] != row.want {
			t.Errorf("at %g: outcome is %s, want %s", row.z, p.out[0], row.want)
		}
		if row.want == correct.Dry {
			p.checkKept(t, "depth", "water level")
			near(t, "depth", p.dst.Depth[0], 0.5-row.z, 0)
			near(t, "water level", p.dst.WaterLevel[0], 0.5, 0)
		}
	}
	p.raw.Z[0], p.out[0] = 0, correct.Outside
	correct.MarkWet(p.out, &p.dst, p.raw, p.planes)
	if p.out[0] != correct.Outside {
		t.Errorf("outcome is %s, want outside", p.out[0])
	}
}

// MarkNoCameras says beforehand what the solver would.
func TestMarkNoCameras(t *testing.T) {
	for name, row := range map[string]struct {
		spoil func(p *photos, b *correct.Bundle)
		want  correct.Outcome
	}{
		"good":                     {func(p *photos, b *correct.Bundle) {}, correct.Corrected},
		"no surface for a ray":     {func(p *photos, b *correct.Bundle) { b.Planes.SlopeX[1] = nan }, correct.NoSurface},
		"camera NaN":               {func(p *photos, b *correct.Bundle) { b.Cameras.X[2] = nan }, correct.NoOrigin},
		"camera under water":       {func(p *photos, b *correct.Bundle) { b.Cameras.Z[0] = 0.5 }, correct.NoOrigin},
		"camera not under water":   {func(p *photos, b *correct.Bundle) { b.FromWater = true }, correct.NoOrigin},
		"one ray from under water": {func(p *photos, b *correct.Bundle) { p.onlyRays(1); b.Cameras.Z[0] = 0 }, correct.NoOrigin},
		"no rays":                  {func(p *photos, b *correct.Bundle) { p.onlyRays(0) }, correct.Corrected},
		"both":                     {func(p *photos, b *correct.Bundle) { b.Cameras.Z[0], b.Planes.Level[2] = 0, nan }, correct.NoSurface},
		"outcome of before":        {func(p *photos, b *correct.Bundle) { p.out[0], b.Cameras.Z[0] = correct.Dry, 0 }, correct.Dry},
	} {
		t.Run(name, func(t *testing.T) {
			p := onePhoto()
			row.spoil(p, &p.bundle)
			correct.MarkNoCameras(p.out, p.raw, &p.bundle)
			if p.out[0] != row.want {
				t.Errorf("outcome is %s, want %s", p.out[0], row.want)
			}
		})
	}
}
