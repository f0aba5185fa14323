package correct_test

import (
	"math"
	"math/rand/v2"

	"bentray/correct"
)

// An independent simulation of a photographic survey over water: entries by the optical path
// (water.entry), the triangulation by what it minimises, with differences for
// derivatives. It shares no code and no formula with the kernel.

type rotation [9]float64

func (v vec) cross(w vec) vec {
	return vec{v[1]*w[2] - v[2]*w[1], v[2]*w[0] - v[0]*w[2], v[0]*w[1] - v[1]*w[0]}
}

func (v vec) unit() vec { return v.plus(1/v.length()-1, v) }

// inCamera returns v in the camera's axes: RT v.
func (r rotation) inCamera(v vec) vec {
	return vec{
		r[0]*v[0] + r[3]*v[1] + r[6]*v[2], r[1]*v[0] + r[4]*v[1] + r[7]*v[2], r[2]*v[0] + r[5]*v[1] + r[8]*v[2],
	}
}

// lookAlong returns the rotation of a camera that looks along dir, turned by kappa.
func lookAlong(dir vec, kappa float64) rotation {
	z := dir.unit().plus(-2, dir.unit())
	side := vec{math.Cos(kappa), math.Sin(kappa), 0.1}
	y := z.cross(side).unit()
	x := y.cross(z)
	return rotation{x[0], y[0], z[0], x[1], y[1], z[1], x[2], y[2], z[2]}
}

// miss returns the residual vector of a raw ray and a point, whose squared length is
// what the triangulation sums up.
func miss(rule correct.Residual, camera, dir, point vec, r rotation) []float64 {
	x := point.plus(-1, camera)
	d := dir.unit()
	switch rule {
	case correct.Image:
		a, b := r.inCamera(x), r.inCamera(d)
		return []float64{a[0]/-a[2] - b[0]/-b[2], a[1]/-a[2] - b[1]/-b[2]}
	case correct.Angle:
		across := d.cross(x)
		share := 1 / x.length()
		if sin := across.length(); sin > 0 {
			share = math.Atan2(sin, d.dot(x)) / sin
		}
		return []float64{share * across[0], share * across[1], share * across[2]}
	default:
		e := x.plus(-d.dot(x), d)
		return e[:]
	}
}

// scene is one point with its cameras and the directions of its raw rays.
type scene struct {
	truth     vec
	cameras   []vec
	rotations []rotation
	waters    []water // one per camera
	dirs      []vec
}

// widest returns the largest angle by which a raw ray misses a point, radians.
func (s *scene) widest(p vec) float64 {
	widest := 0.0
	for k, c := range s.cameras {
		way := p.plus(-1, c)
		widest = max(widest, math.Atan2(s.dirs[k].cross(way).length(), s.dirs[k].dot(way)))
	}
	return widest
}

// triangulate returns where the straight rays intersect best: Gauss-Newton from start.
func (s *scene) triangulate(rule correct.Residual, start vec) vec {
	h := math.Inf(1)
	for _, c := range s.cameras {
		h = min(h, 1e-4*start.plus(-1, c).length())
	}
	p := start
	for range 200 {
		var n [3][4]float64
		for k := range s.cameras {
			at := func(p vec) []float64 { return miss(rule, s.cameras[k], s.dirs[k], p, s.rotations[k]) }
			e := at(p)
			var by [3][]float64
			for c := range 3 {
				up, down := p, p
				up[c] += h
				down[c] -= h
				a, b := at(up), at(down)
				by[c] = make([]float64, len(e))
				for m := range e {
					by[c][m] = (a[m] - b[m]) / (2 * h)
				}
			}
			for c := range 3 {
				for m := range e {
					for d := range 3 {
						n[c][d] += by[c][m] * by[d][m]
					}
					n[c][3] -= by[c][m] * e[m]
				}
			}
		}
		step := eliminate(n)
		p = p.plus(1, step)
		if step.length() < 1e-13 {
			break
		}
	}
	return p
}

// eliminate solves three equations with the right side in the last column.
func eliminate(n [3][4]float64) vec {
	for c := range 3 {
		best := c
		for r := c + 1; r < 3; r++ {
			if math.Abs(n[r][c]) > math.Abs(n[best][c]) {
				best = r
			}
		}
		n[c], n[best] = n[best], n[c]
		for r := range 3 {
			if r == c {
				continue
			}
			f := n[r][c] / n[c][c]
			for k := range 4 {
				n[r][k] -= f * n[c][k]
			}
		}
	}
	return vec{n[0][3] / n[0][0], n[1][3] / n[1][1], n[2][3] / n[2][2]}
}

// entry returns where the light between the point and camera k crosses the surface.
func (s *scene) entry(k int) vec {
	c := s.cameras[k]
	if c[2] > s.truth[2] {
		return s.waters[k].entry(c, s.truth)
	}
	return s.waters[k].entry(s.truth, c)
}

// shoot takes the raw direction of each camera.
func (s *scene) shoot() {
	s.dirs = s.dirs[:0]
	for k, c := range s.cameras {
		s.dirs = append(s.dirs, s.entry(k).plus(-1, c))
	}
}

// network is a kind of arrangement of cameras around the origin at a height.
type network func(r *rand.Rand, height, maxOffNadirRad float64) []vec

func around(r *rand.Rand, height, maxOffNadirRad, from, to float64, count int) []vec {
	var out []vec
	for k := range count {
		turn := from + (to-from)*float64(k)/float64(count-1)
		away := height * math.Tan(maxOffNadirRad*(0.4+0.6*r.Float64()))
		out = append(out, vec{away * math.Cos(turn), away * math.Sin(turn), height * (0.97 + 0.06*r.Float64())})
	}
	return out
}

var networks = map[string]network{
	"ring": func(r *rand.Rand, h, m float64) []vec { return around(r, h, m, 0, 5.5, 8) },
	"side": func(r *rand.Rand, h, m float64) []vec { return around(r, h, m, 0.3, 1.4, 6) },
	"pair": func(r *rand.Rand, h, m float64) []vec { return around(r, h, m, 1, 4, 2) },
	"strip": func(r *rand.Rand, h, m float64) []vec {
		var out []vec
		for k := range 7 {
			away := h * math.Tan(m) * (float64(k-3)/3 + 0.05*r.Float64())
			out = append(out, vec{away, 0, h * (0.97 + 0.06*r.Float64())})
		}
		return out
	},
}

// level returns a scene over level water at height 0, of index 1.34 below air of index 1.
func level(truth vec, cameras ...vec) *scene {
	s := &scene{truth: truth, cameras: cameras}
	for _, c := range cameras {
		s.waters = append(s.waters, water{air: 1, waterPhase: 1.34})
		s.rotations = append(s.rotations, lookAlong(truth.plus(-1, c), 0.3))
	}
	s.shoot()
	return s
}

// photos returns the scene as a cloud of one point.
func (s *scene) photos(rule correct.Residual) *photos {
	p := newPhotos(s.waters[0].air)
	p.bundle.Residual = rule
	p.add(s, s.triangulate(rule, s.truth), noOffset)
	return p
}

// photos is a simulated cloud from images with its truth.
type photos struct {
	scenes     []*scene
	truth, raw correct.XYZ
	planes     correct.Planes // at the raw plan position of each point, for the marks
	bundle     correct.Bundle
	out        []correct.Outcome
	dst        correct.Result
	solver     correct.MultiviewSolver
}

func newPhotos(air float64) *photos {
	p := &photos{}
	p.bundle.Cameras = &correct.Cameras{}
	p.bundle.Light.Air = air
	p.bundle.Start = []int32{0}
	p.bundle.MaxIncidenceRad = limit
	return p
}

// add appends the point of a scene, moved by offset, with its apparent point raw.
func (p *photos) add(s *scene, raw, offset vec) {
	push := func(to *correct.XYZ, v vec) {
		to.X, to.Y, to.Z = append(to.X, v[0]+offset[0]), append(to.Y, v[1]+offset[1]), append(to.Z, v[2]+offset[2])
	}
	plane := func(to *correct.Planes, w water) {
		to.Level = append(to.Level, w.at(raw[0], raw[1])+offset[2])
		to.SlopeX, to.SlopeY = append(to.SlopeX, w.sx), append(to.SlopeY, w.sy)
	}
	b := &p.bundle
	p.scenes = append(p.scenes, s)
	push(&p.truth, s.truth)
	push(&p.raw, raw)
	plane(&p.planes, s.waters[0])
	for k, c := range s.cameras {
		b.Camera = append(b.Camera, int32(len(b.Cameras.X)))
		push(&b.Cameras.XYZ, c)
		b.Cameras.Rotation = append(b.Cameras.Rotation, s.rotations[k])
		plane(&b.Planes, s.waters[k])
	}
	b.Start = append(b.Start, int32(len(b.Camera)))
	b.Light.Water = append(b.Light.Water, s.waters[0].waterPhase)
	p.out = append(p.out, correct.Corrected)
	p.dst = correct.NewResult(len(p.out))
}

func (p *photos) solve() {
	correct.MarkInvalid(p.out, p.raw)
	correct.MarkNoSurface(p.out, p.planes)
	if p.bundle.FromWater {
		correct.MarkWet(p.out, &p.dst, p.raw, p.planes)
	} else {
		correct.MarkDry(p.out, &p.dst, p.raw, p.planes)
	}
	p.solver.Solve(&p.dst, p.out, nil, p.raw, &p.bundle)
}

// randomScene returns a point at most 12 m deep seen from 30 to 120 m, off nadir
// to maxOffNadirDeg; all slopes to maxSlope, of each ray's plane its own if ownPlanes.
func randomScene(r *rand.Rand, kind network, maxOffNadirDeg, maxSlope float64, ownPlanes bool) *scene {
	s := &scene{truth: vec{3 * r.NormFloat64(), 3 * r.NormFloat64(), 0}}
	height := 30 + 90*r.Float64()
	s.cameras = kind(r, height, maxOffNadirDeg*math.Pi/180)
	w := water{air: 1.000277, waterPhase: 1.34 + 0.004*r.NormFloat64(), level: r.NormFloat64()}
	for k, c := range s.cameras {
		if k == 0 || ownPlanes {
			w.sx, w.sy = maxSlope*(2*r.Float64()-1), maxSlope*(2*r.Float64()-1)
		}
		s.waters = append(s.waters, w)
		aim := vec{10 * r.NormFloat64(), 10 * r.NormFloat64(), 0}.plus(-1, c)
		s.rotations = append(s.rotations, lookAlong(aim, 6*r.Float64()))
	}
	lowest := math.Inf(1)
	for _, w := range s.waters {
		lowest = min(lowest, w.at(s.truth[0], s.truth[1]))
	}
	s.truth[2] = lowest - 0.1 - 11.9*r.Float64()
	s.shoot()
	return s
}

// simulatePhotos returns n random points.
func simulatePhotos(n int, kind network, rule correct.Residual, maxOffNadirDeg, maxSlope float64, ownPlanes bool, offset vec) *photos {
	r := rand.New(rand.NewPCG(seed, uint64(n)))
	p := newPhotos(1.000277)
	p.bundle.Residual = rule
	for range n {
		s := randomScene(r, kind, maxOffNadirDeg, maxSlope, ownPlanes)
		p.add(s, s.triangulate(rule, s.truth.plus(1, vec{0, 0, 1})), offset)
	}
	return p
}
