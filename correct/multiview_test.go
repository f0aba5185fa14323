package correct_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/optimize"

	"bentray/correct"
)

var residuals = map[string]correct.Residual{"image": correct.Image, "angle": correct.Angle, "equal": correct.Equal}

// checkTruth fails the test unless all points are corrected to their truth.
func (p *photos) checkTruth(t *testing.T, tol float64) {
	t.Helper()
	for i, o := range p.out {
		if o != correct.Corrected {
			t.Fatalf("seed %d: point %d is %s", seed, i, o)
		}
		near(t, "x", p.dst.X[i], p.truth.X[i], tol)
		near(t, "y", p.dst.Y[i], p.truth.Y[i], tol)
		near(t, "z", p.dst.Z[i], p.truth.Z[i], tol)
		if t.Failed() {
			t.Fatalf("seed %d: point %d", seed, i)
		}
	}
}

func TestInvertReturnsTruth(t *testing.T) {
	for kind, cameras := range networks {
		for rule, residual := range residuals {
			for _, row := range []struct {
				name      string
				slope     float64
				ownPlanes bool
				offset    vec
			}{
				{"level", 0, false, noOffset},
				{"tilted", 0.1, false, noOffset},
				{"each ray its plane", 0.05, true, noOffset},
				{"7 million metres north", 0.05, false, vec{5e5, 7e6, 0}},
			} {
				t.Run(fmt.Sprint(kind, "/", rule, "/", row.name), func(t *testing.T) {
					p := simulatePhotos(60, cameras, residual, 45, row.slope, row.ownPlanes, row.offset)
					p.solve()
					p.checkTruth(t, 1e-6)
				})
			}
		}
	}
}

// The columns beside the position, against the simulation.
func TestInvertColumns(t *testing.T) {
	p := simulatePhotos(60, networks["ring"], correct.Angle, 45, 0.05, true, noOffset)
	p.solve()
	for i, s := range p.scenes {
		w := s.waters[0]
		near(t, "water level", p.dst.WaterLevel[i], w.at(s.truth[0], s.truth[1]), 1e-7)
		near(t, "depth", p.dst.Depth[i], w.at(s.truth[0], s.truth[1])-s.truth[2], 1e-6)
		var level, incidence, refraction float64
		for k, c := range s.cameras {
			up := vec{-s.waters[k].sx, -s.waters[k].sy, 1}.unit()
			entry := s.entry(k)
			level += entry[2]
			incidence += math.Acos(c.plus(-1, entry).unit().dot(up))
			refraction += math.Acos(entry.plus(-1, s.truth).unit().dot(up))
		}
		n := float64(len(s.cameras))
		near(t, "entry level", p.dst.EntryLevel[i], level/n, 1e-7)
		near(t, "incidence", p.dst.IncidenceRad[i], incidence/n, 1e-7)
		near(t, "refraction", p.dst.RefractionRad[i], refraction/n, 1e-7)
		if t.Failed() {
			t.Fatalf("seed %d: point %d", seed, i)
		}
	}
}

// Cameras under water that look up at points in the air.
func TestInvertFromWater(t *testing.T) {
	for rule, residual := range residuals {
		t.Run(rule, func(t *testing.T) {
			r := rand.New(rand.NewPCG(seed, 7))
			p := newPhotos(1.000277)
			p.bundle.FromWater, p.bundle.Residual = true, residual
			for range 100 {
				s := &scene{truth: vec{r.NormFloat64(), r.NormFloat64(), 0.7 + 3*r.Float64()}}
				w := water{air: 1.000277, waterPhase: 1.34, level: 0.2, sx: 0.02 * r.NormFloat64(), sy: 0.02 * r.NormFloat64()}
				for _, c := range networks["ring"](r, 4, 0.6) {
					c[2] = -c[2]
					s.cameras, s.waters = append(s.cameras, c), append(s.waters, w)
					s.rotations = append(s.rotations, lookAlong(s.truth.plus(-1, c), r.Float64()))
				}
				s.shoot()
				p.add(s, s.triangulate(residual, s.truth), noOffset)
			}
			p.solve()
			p.checkTruth(t, 1e-6)
			for i := range p.out {
				near(t, "depth", p.dst.Depth[i], p.dst.WaterLevel[i]-p.truth.Z[i], 1e-6)
				if !(p.dst.Depth[i] < 0 && p.dst.RefractionRad[i] > p.dst.IncidenceRad[i]) {
					t.Errorf("depth %g, incidence %g, refraction %g", p.dst.Depth[i], p.dst.IncidenceRad[i], p.dst.RefractionRad[i])
				}
			}
		})
	}
}

// Looking up is looking down upon a world turned over, with the media changed.
func TestInvertMirror(t *testing.T) {
	down := simulatePhotos(40, networks["side"], correct.Angle, 40, 0.05, true, noOffset)
	up := simulatePhotos(40, networks["side"], correct.Angle, 40, 0.05, true, noOffset)
	flip := func(columns ...[]float64) {
		for _, c := range columns {
			for i := range c {
				c[i] = -c[i]
			}
		}
	}
	u := &up.bundle
	flip(up.raw.Z, up.planes.Level, up.planes.SlopeX, up.planes.SlopeY)
	flip(u.Cameras.Z, u.Planes.Level, u.Planes.SlopeX, u.Planes.SlopeY)
	u.FromWater, u.Light.Air, down.bundle.Light.Air = true, 1.33, 1
	for i := range u.Light.Water {
		u.Light.Water[i], down.bundle.Light.Water[i] = 1, 1.33
	}
	for _, solve := range []correct.Solve{correct.Invert, correct.Intersect, correct.Average} {
		down.bundle.Solve, u.Solve = solve, solve
		down.solve()
		up.solve()
		for i, o := range down.out {
			if o != correct.Corrected || up.out[i] != o || up.dst.X[i] != down.dst.X[i] || up.dst.Y[i] != down.dst.Y[i] || up.dst.Z[i] != -down.dst.Z[i] ||
				up.dst.Depth[i] != -down.dst.Depth[i] || up.dst.IncidenceRad[i] != down.dst.IncidenceRad[i] {
				t.Fatalf("seed %d: solve %d, point %d: z is %.17g up and %.17g down, outcome %s and %s", seed, solve, i, up.dst.Z[i], down.dst.Z[i], up.out[i], o)
			}
		}
	}
}

func TestMultiviewEqualIndices(t *testing.T) {
	for rule, residual := range residuals {
		for kind, cameras := range networks {
			for _, solve := range []correct.Solve{correct.Invert, correct.Intersect, correct.Average} {
				p := simulatePhotos(30, cameras, residual, 30, 0.05, true, noOffset)
				p.bundle.Solve, p.bundle.Light.Air = solve, 1.34
				for i := range p.bundle.Light.Water {
					p.bundle.Light.Water[i] = 1.34
				}
				p.truth = p.raw
				p.solve()
				t.Run(fmt.Sprint(kind, "/", rule, "/", solve), func(t *testing.T) { p.checkTruth(t, 1e-12) })
			}
		}
	}
}

// A second opinion on the whole: gonum's minimiser finds no better intersection of the
// rays traced to the corrected point than the raw point.
func TestInvertLeastCost(t *testing.T) {
	for rule, residual := range residuals {
		t.Run(rule, func(t *testing.T) {
			p := simulatePhotos(10, networks["ring"], residual, 35, 0.05, false, noOffset)
			p.solve()
			for i, s := range p.scenes {
				s.truth = vec{p.dst.X[i], p.dst.Y[i], p.dst.Z[i]}
				s.shoot()
				raw := vec{p.raw.X[i], p.raw.Y[i], p.raw.Z[i]}
				cost := func(x []float64) float64 {
					sum := 0.0
					for k := range s.cameras {
						for _, e := range miss(residual, s.cameras[k], s.dirs[k], vec(x), s.rotations[k]) {
							sum += e * e
						}
					}
					return sum
				}
				found, err := optimize.Minimize(optimize.Problem{Func: cost}, []float64{raw[0] + 0.01, raw[1], raw[2] - 0.05}, nil, &optimize.NelderMead{})
				if err != nil {
					t.Fatalf("seed %d: %v", seed, err)
				}
				if cost(raw[:]) > found.F*(1+1e-7) {
					t.Errorf("seed %d: point %d: cost %.12g, the minimiser has %.12g", seed, i, cost(raw[:]), found.F)
				}
				near(t, "z of the least cost", found.X[2], raw[2], 1e-4)
			}
		})
	}
}

// Networks at the edge of what can be solved.
func TestInvertHardNetworks(t *testing.T) {
	for name, s := range map[string]*scene{
		"2 mm deep":                        level(vec{1, 2, -0.002}, vec{-20, 0, 60}, vec{20, 5, 60}, vec{0, 25, 55}),
		"0.1 mm deep":                      level(vec{1, 2, -0.0001}, vec{-20, 0, 60}, vec{20, 5, 60}, vec{0, 25, 55}),
		"cameras nearly in line":           level(vec{1, 2, -5}, vec{-20, 1e-6, 60}, vec{0, 0, 60}, vec{25, -1e-6, 60}),
		"cameras in line with the point":   level(vec{3, 0, -5}, vec{-20, 0, 60}, vec{0, 0, 60}, vec{25, 0, 60}),
		"two cameras in line with it":      level(vec{0, 0, -5}, vec{-20, 0, 60}, vec{20, 0, 60}),
		"short base":                       level(vec{3, 0, -5}, vec{-1, 0, 60}, vec{1, 0, 60}),
		"short base along the view":        level(vec{40, 0, -5}, vec{-1, 0, 60}, vec{1, 0, 60}),
		"base of one 2000th of the height": level(vec{3, 0, -5}, vec{-0.015, 0, 60}, vec{0.015, 0, 60}),
		"one camera straight above":        level(vec{0, 0, -5}, vec{0, 0, 60}, vec{10, 0, 60}),
		"a camera twice":                   level(vec{1, 0, -5}, vec{-20, 0, 60}, vec{20, 3, 60}, vec{20, 3, 60}),
		"deep under low cameras":           level(vec{0.5, 0, -30}, vec{-2, 0, 1}, vec{2, 1, 1}, vec{0, -2, 1.5}),
		"cameras just above the water":     level(vec{0.2, 0.1, -1}, vec{-0.3, 0, 0.01}, vec{0.5, 0.3, 0.01}, vec{0, -0.4, 0.02}),
		"59 degrees on one side":           level(vec{0, 0, -8}, vec{100, 10, 60}, vec{95, -20, 60}, vec{90, 5, 57}),
		"one far, one near":                level(vec{1, 0, -3}, vec{-500, 20, 900}, vec{1, 3, 4}),
	} {
		for rule, residual := range residuals {
			t.Run(name+"/"+rule, func(t *testing.T) {
				p := s.photos(residual)
				p.solve()
				p.checkTruth(t, 1e-6)
			})
		}
	}
}

// From under water a raw ray may be past the critical angle though the light was not: the
// far camera's here, so that the raw rays cannot be refracted and intersected.
func TestInvertPastCriticalAngle(t *testing.T) {
	for rule, residual := range map[string]correct.Residual{"angle": correct.Angle, "image": correct.Image} {
		t.Run(rule, func(t *testing.T) {
			p := level(vec{0, 0, 2.067}, vec{1.923, -0.672, -2.818}, vec{60.081, -9.676, -25.148}, vec{0.028, 2.145, -1.497}).photos(residual)
			p.bundle.FromWater, p.bundle.MaxIncidenceRad = true, math.Pi/2
			p.bundle.Solve = correct.Intersect
			p.solve()
			if p.out[0] != correct.Grazing {
				t.Errorf("refracted and intersected: outcome is %s, want grazing", p.out[0])
			}
			p.bundle.Solve, p.out[0] = correct.Invert, correct.Corrected
			p.solve()
			p.checkTruth(t, 1e-6)
		})
	}
}

// Here Newton's method ends where a camera would have seen the point behind itself.
func TestInvertRootBehindCamera(t *testing.T) {
	p := level(vec{0, 0, 0.740308116127848}, vec{54.32343439272241, 15.371390882327882, -28.369622375494323}, vec{24.20686051572396, 3.6340361762501927, -22.623318378457128},
		vec{3.593090397861785, -0.13866438935206732, -2.053513666048961}, vec{10.656753324709438, 3.05296876162375, -11.621380190904928}).photos(correct.Image)
	p.bundle.FromWater, p.bundle.MaxIncidenceRad = true, math.Pi/2
	p.solve()
	if p.out[0] != correct.Grazing {
		t.Errorf("outcome is %s at %g %g %g, want grazing", p.out[0], p.dst.X[0], p.dst.Y[0], p.dst.Z[0])
	}
}

// Few cameras anywhere, to 80 degrees off nadir and from 0.1 m to 50 m, over up to 20 m of
// water; or under water, to where light from above still comes.
func TestInvertWildNetworks(t *testing.T) {
	for rule, residual := range residuals {
		for way, side := range map[string]float64{"down": 1, "up": -1} {
			t.Run(rule+"/"+way, func(t *testing.T) {
				r := rand.New(rand.NewPCG(seed, 9))
				for i := range 1000 {
					var cameras []vec
					for range 2 + r.IntN(4) {
						height, turn := 0.1+50*r.Float64()*r.Float64(), 2*math.Pi*r.Float64()
						away := height * math.Tan((60+20*side)*r.Float64()*math.Pi/180)
						cameras = append(cameras, vec{away * math.Cos(turn), away * math.Sin(turn), side * height})
					}
					s := level(vec{0, 0, -side * (0.01 + 20*r.Float64()*r.Float64())}, cameras...)
					p := s.photos(residual)
					p.bundle.FromWater, p.bundle.MaxIncidenceRad = side < 0, math.Pi/2
					p.solve()
					p.checkTruth(t, 1e-6)
					if t.Failed() {
						t.Fatalf("seed %d: case %d: %+v", seed, i, s)
					}
				}
			})
		}
	}
}

// Whatever a warm start begins with, what comes out is the truth or no solution.
func TestInvertWarmStart(t *testing.T) {
	for rule, residual := range residuals {
		t.Run(rule, func(t *testing.T) {
			p := simulatePhotos(300, networks["ring"], residual, 45, 0.05, false, noOffset)
			p.bundle.Warm = true
			r := rand.New(rand.NewPCG(seed, 8))
			for i := range p.out {
				p.dst.X[i], p.dst.Y[i] = p.truth.X[i]+9*r.NormFloat64(), p.truth.Y[i]+9*r.NormFloat64()
				p.dst.Z[i] = p.truth.Z[i] + 9*r.NormFloat64()
			}
			p.dst.Z[0], p.dst.X[1], p.dst.Z[2] = 99, nan, inf
			p.solve()
			p.checkTruth(t, 1e-6)
		})
	}
}
