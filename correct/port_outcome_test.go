package correct_test

import (
	"fmt"
	"math"
	"testing"

	"bentray/correct"
	"bentray/correct/optics"
)

// onePort returns a good point 2 m in front of four cameras that look straight down, behind 20 mm
// of gas and 10 mm of glass; their light has 0.46 rad in the housing.
func onePort(calibration float64) *photos {
	g := rigs["plain"]
	g.calibration = calibration
	return g.dive(correct.Image, noOffset, g.ring(2, 0.5))
}

// turnRound makes camera k look straight up.
func (p *photos) turnRound(k int) {
	p.bundle.Cameras.Rotation[k] = rotation{1, 0, 0, 0, -1, 0, 0, 0, -1}
}

// raise puts the raw point at a height below the perspective centres.
func (p *photos) raise(belowM float64) { p.raw.Z[0] = p.bundle.Cameras.Z[0] - belowM }

// glass gives the port another pane.
func (p *photos) glass(index float64) {
	p.bundle.Port.Panes = []optics.Layer{{ThicknessM: 0.01, Index: index}}
}

// Each row spoils a good point in one way; the last rows in several, for precedence.
func TestPortOutcomes(t *testing.T) {
	for _, row := range []struct {
		name  string
		spoil func(p *photos, b *correct.Bundle)
		want  correct.Outcome
	}{
		{"good", func(p *photos, b *correct.Bundle) {}, correct.Corrected},
		{"x NaN", func(p *photos, b *correct.Bundle) { p.raw.X[0] = nan }, correct.Invalid},
		{"camera NaN", func(p *photos, b *correct.Bundle) { b.Cameras.Y[1] = nan }, correct.NoOrigin},
		{"camera Inf", func(p *photos, b *correct.Bundle) { b.Cameras.Z[1] = inf }, correct.NoOrigin},
		{"rotation NaN", func(p *photos, b *correct.Bundle) { b.Cameras.Rotation[2][5] = nan }, correct.NoOrigin},
		{"one ray", func(p *photos, b *correct.Bundle) { b.Start, b.Camera = []int32{0, 1}, b.Camera[:1] }, correct.FewRays},
		{"no rays", func(p *photos, b *correct.Bundle) { b.Start, b.Camera = []int32{0, 0}, nil }, correct.FewRays},
		{"beyond the limit", func(p *photos, b *correct.Bundle) { b.MaxIncidenceRad = 0.46 }, correct.Grazing},
		{"within the limit", func(p *photos, b *correct.Bundle) { b.MaxIncidenceRad = 0.47 }, correct.Corrected},
		{"limit not a number", func(p *photos, b *correct.Bundle) { b.MaxIncidenceRad = nan }, correct.Grazing},
		{"behind the cameras", func(p *photos, b *correct.Bundle) { p.raise(-0.5) }, correct.Grazing},
		{"behind them, refracted", func(p *photos, b *correct.Bundle) { p.raise(-0.5); b.Solve = correct.Intersect }, correct.Grazing},
		{"behind them, averaged", func(p *photos, b *correct.Bundle) { p.raise(-0.5); b.Solve = correct.Average }, correct.Grazing},
		{"beside the cameras", func(p *photos, b *correct.Bundle) { p.raise(0) }, correct.Grazing},
		{"in the housing", func(p *photos, b *correct.Bundle) { p.raise(0.01); b.MaxIncidenceRad = math.Pi / 2 }, correct.Grazing},
		{"behind one camera", func(p *photos, b *correct.Bundle) { p.turnRound(2) }, correct.Grazing},
		{"behind one camera, angles", func(p *photos, b *correct.Bundle) { p.turnRound(2); b.Residual = correct.Angle }, correct.Grazing},
		{"no index of water", func(p *photos, b *correct.Bundle) { b.Light.Water[0] = 0 }, correct.Unsolved},
		{"no index of gas", func(p *photos, b *correct.Bundle) { b.Light.Air = nan }, correct.Unsolved},
		{"no index of glass", func(p *photos, b *correct.Bundle) { p.glass(0) }, correct.Unsolved},
		{"index of glass NaN", func(p *photos, b *correct.Bundle) { p.glass(nan) }, correct.Unsolved},
		{"cameras coincide", func(p *photos, b *correct.Bundle) { b.Camera = []int32{1, 1, 1, 1} }, correct.Unsolved},
		{"no rotation, one ray", func(p *photos, b *correct.Bundle) {
			b.Start, b.Camera, b.Cameras.Rotation[0][8] = []int32{0, 1}, b.Camera[:1], nan
		}, correct.NoOrigin},
		{"camera NaN, no index", func(p *photos, b *correct.Bundle) { b.Cameras.X[0], b.Light.Air = nan, nan }, correct.NoOrigin},
		{"outcome of before", func(p *photos, b *correct.Bundle) { p.out[0] = correct.NoWater }, correct.NoWater},
	} {
		for _, calibration := range []float64{0, 1} {
			t.Run(fmt.Sprint(row.name, "/", calibration), func(t *testing.T) {
				p := onePort(calibration)
				row.spoil(p, &p.bundle)
				p.look()
				if p.out[0] != row.want {
					t.Fatalf("outcome is %s, want %s", p.out[0], row.want)
				}
				switch row.want {
				case correct.Corrected:
					p.checkTruth(t, 1e-9)
				case correct.Grazing:
					p.checkKept(t, "incidence")
				default:
					p.checkKept(t)
				}
			})
		}
	}
}

// The incidence that a limit refused is that of the light in the housing, whatever the
// calibration, and whether there is a solution or, for one camera twice, none.
func TestPortGrazingIncidence(t *testing.T) {
	for _, calibration := range []float64{0, 1} {
		for _, cameras := range [][]int32{{0, 1, 2, 3}, {1, 1, 1, 1}} {
			p := onePort(calibration)
			p.bundle.Camera, p.bundle.MaxIncidenceRad = cameras, 0.4
			p.look()
			if p.out[0] != correct.Grazing {
				t.Errorf("calibration %g, cameras %v: outcome is %s, want grazing", calibration, cameras, p.out[0])
			}
			near(t, "incidence", p.dst.IncidenceRad[0], math.Atan(0.5), 1e-9)
		}
	}
}

// A raw ray beyond the critical angle of the water has no light: from the denser gas here at 26.4
// degrees, or from the pane at all angles of more than 23.6.
func TestPortTotalReflection(t *testing.T) {
	for _, solve := range []correct.Solve{correct.Invert, correct.Intersect, correct.Average} {
		for name, spoil := range map[string]func(p *photos){
			"water":  func(p *photos) { p.bundle.Light.Air = 3 },
			"a pane": func(p *photos) { p.glass(0.4) },
		} {
			p := onePort(0)
			spoil(p)
			p.bundle.Solve, p.bundle.MaxIncidenceRad = solve, math.Pi/2
			p.look()
			if p.out[0] != correct.Grazing {
				t.Errorf("solve %d, total reflection at %s: outcome is %s, want grazing", solve, name, p.out[0])
			}
		}
	}
}

// MarkNoCameras knows as much without the solver.
func TestMarkNoCamerasPort(t *testing.T) {
	for _, row := range []struct {
		spoil func(p *photos)
		want  correct.Outcome
	}{
		{func(p *photos) {}, correct.Corrected},
		{func(p *photos) { p.raise(-1) }, correct.Corrected},
		{func(p *photos) { p.bundle.Cameras.X[1] = nan }, correct.NoOrigin},
		{func(p *photos) { p.bundle.Cameras.Rotation[3][0] = inf }, correct.NoOrigin},
	} {
		p := onePort(0)
		row.spoil(p)
		correct.MarkNoCameras(p.out, p.raw, &p.bundle)
		if p.out[0] != row.want {
			t.Errorf("outcome is %s, want %s", p.out[0], row.want)
		}
	}
}

func TestPortNeedsRotations(t *testing.T) {
	defer func() {
		if got := recover(); got != "correct: the image residual and a port need the rotation of each camera" {
			t.Errorf("panic is %v, want one that speaks of rotations", got)
		}
	}()
	p := onePort(0)
	p.bundle.Residual, p.bundle.Cameras.Rotation = correct.Angle, nil
	p.look()
}

func TestPortNoAllocation(t *testing.T) {
	g := rigs["tilted"]
	for _, m := range []float64{0, 1} {
		g.calibration = m
		p := g.random(50, correct.Image, noOffset)
		p.look()
		if got := testing.AllocsPerRun(5, func() { clear(p.out); p.look() }); got != 0 {
			t.Errorf("%g allocations a call, want 0", got)
		}
	}
}

func BenchmarkPort(b *testing.B) {
	for rule, residual := range residuals {
		for calibration, m := range map[string]float64{"air": 0, "water": 1} {
			b.Run(rule+"/"+calibration, func(b *testing.B) {
				g := rigs["tilted"]
				g.calibration = m
				p := g.random(1000, residual, noOffset)
				b.ReportAllocs()
				for b.Loop() {
					clear(p.out)
					p.solver.Solve(&p.dst, p.out, nil, p.raw, &p.bundle)
				}
				b.ReportMetric(float64(b.N)*float64(len(p.out))/b.Elapsed().Seconds(), "points/s")
				if math.IsNaN(p.dst.IncidenceRad[0]) {
					b.Fatal("not solved")
				}
			})
		}
	}
}
