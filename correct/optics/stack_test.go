package optics_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/optimize"

	"bentray/correct/optics"
)

// pile is one task for Fermat with inner layers; the first and the last layer are the way
// in the near and the far medium.
type pile struct {
	layers []optics.Layer
	run    float64
}

func (p pile) ends() (near, far optics.Layer) { return p.layers[0], p.layers[len(p.layers)-1] }

func (p pile) stack() optics.Stack {
	near, far := p.ends()
	return optics.NewStack(near.Index, far.Index, p.layers[1:len(p.layers)-1]...)
}

func (p pile) slopes() optics.Slopes {
	s := p.stack()
	near, far := p.ends()
	return s.Fermat(near.ThicknessM, far.ThicknessM, p.run*p.run, optics.Slopes{})
}

func (p pile) reversed() pile {
	back := slices.Clone(p.layers)
	slices.Reverse(back)
	return pile{back, p.run}
}

// piles are random, of 2 to 6 layers over some powers of ten; any may be the thinnest.
func piles(n, powers int) []pile {
	r := rand.New(rand.NewPCG(seed, uint64(100+n)))
	power := func() float64 { return math.Pow(10, float64(powers)*(r.Float64()-0.5)) }
	out := make([]pile, n)
	for i := range out {
		out[i].run = power()
		for range 2 + r.IntN(5) {
			out[i].layers = append(out[i].layers, optics.Layer{ThicknessM: power(), Index: 1 + r.Float64()})
		}
	}
	return out
}

// parameter returns the ray parameter p = n sin(angle) by bisection of run(p) = sum t p / sqrt(n^2 - p^2),
// as the share of the thinnest index that is missing from it: 1 - p / n.
func (p pile) parameter() (missing, thin float64) {
	thin = math.Inf(1)
	for _, l := range p.layers {
		thin = min(thin, l.Index)
	}
	low, high := 0.0, 1.0
	for range 1100 {
		missing = low + (high-low)/2
		run := 0.0
		for _, l := range p.layers {
			q := thin * (1 - missing)
			run += l.ThicknessM * q / math.Sqrt((l.Index-thin+thin*missing)*(l.Index+q))
		}
		if run > p.run {
			low = missing
		} else {
			high = missing
		}
	}
	return missing, thin
}

func TestStackRayParameter(t *testing.T) {
	for i, p := range piles(2000, 6) {
		s, stack := p.slopes(), p.stack()
		near_, far := p.ends()
		run := s.Near*near_.ThicknessM + stack.InnerRun(s, p.run*p.run) + s.Far*far.ThicknessM
		near(t, "run", run, 1, 1e-14)
		missing, thin := p.parameter()
		want := thin * (1 - missing)
		near(t, "n sin in the near medium", near_.Index*math.Sin(math.Atan(s.Near*p.run)), want, 1e-13)
		near(t, "n sin in the far medium", far.Index*math.Sin(math.Atan(s.Far*p.run)), want, 1e-13)
		near(t, "n sin in the thinnest medium", thin*math.Sin(math.Atan(s.Thin*p.run)), want, 1e-13)
		if t.Failed() {
			t.Fatalf("seed %d: pile %d: %+v", seed, i, p)
		}
	}
}

// No other way through a pane takes less time, by gonum's minimiser.
func TestStackLeastTime(t *testing.T) {
	for i, p := range piles(600, 2) {
		if len(p.layers) != 3 {
			continue
		}
		path := func(x []float64) float64 {
			sum := 0.0
			for k, share := range []float64{x[0], x[1] - x[0], 1 - x[1]} {
				sum += p.layers[k].Index * math.Hypot(p.layers[k].ThicknessM, share*p.run)
			}
			return sum
		}
		s := p.slopes()
		near, far := p.ends()
		mine := path([]float64{s.Near * near.ThicknessM, 1 - s.Far*far.ThicknessM})
		found, err := optimize.Minimize(optimize.Problem{Func: path}, []float64{0.3, 0.6}, nil, &optimize.NelderMead{})
		if err != nil {
			t.Fatalf("seed %d: pile %d: %v", seed, i, err)
		}
		if mine > found.F*(1+1e-15) {
			t.Errorf("seed %d: pile %d %+v: path %.17g, the minimiser has %.17g", seed, i, p, mine, found.F)
		}
	}
}

// Straight up through glass, Young & Freedman's apparent depth: the near slope is that of
// a straight ray to the image.
func TestStackPublishedApparentDepth(t *testing.T) {
	c := published(t, "layers-YF")
	thickness, index := numbers(c.Inputs["thickness"]), numbers(c.Inputs["index"])
	const above = 3
	p := pile{[]optics.Layer{{ThicknessM: above, Index: 1}, {ThicknessM: thickness[0], Index: index[0]}, {ThicknessM: thickness[1], Index: index[1]}}, 0}
	got := 1/p.slopes().Near - above
	near(t, c.Source+": apparent depth", got, c.Recomputed["apparent"].(float64), 1e-14)
	near(t, c.Source+": printed depth", got, c.Published["apparent"].(float64), 1e-3)
}

// A pane in one medium displaces the ray as the textbook's formula says.
func TestStackIsPlateShift(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 21))
	for i := range 1000 {
		n, ratio, thickness, run := 1+r.Float64(), 0.8+r.Float64(), r.Float64(), 0.1+2*r.Float64()
		s := optics.NewStack(n, n, optics.Layer{ThicknessM: thickness, Index: n * ratio})
		slopes := s.Fermat(1, 2, run*run, optics.Slopes{})
		rad := math.Atan(slopes.Near * run)
		aside := (slopes.Near*(3+thickness) - 1) * run * math.Cos(rad)
		near(t, "displacement", aside, optics.PlateShift(thickness, rad, ratio), 1e-14)
		near(t, "far slope over near", slopes.Far/slopes.Near, 1, 1e-15)
		if t.Failed() {
			t.Fatalf("seed %d: case %d", seed, i)
		}
	}
}

func TestStackReversible(t *testing.T) {
	for i, p := range piles(1000, 6) {
		s, back := p.slopes(), p.reversed().slopes()
		near(t, "near slope over the far one back", s.Near/back.Far, 1, 1e-14)
		near(t, "far slope over the near one back", s.Far/back.Near, 1, 1e-14)
		if t.Failed() {
			t.Fatalf("seed %d: pile %d: %+v", seed, i, p)
		}
	}
}

// One layer may be cut into several, and layers of no thickness change no bit, whatever their
// index.
func TestStackCutLayers(t *testing.T) {
	for i, c := range crossings(1000) {
		want := c.slopes()
		none := optics.NewStack(c.nNear, c.nFar, optics.Layer{Index: 0.1}, optics.Layer{Index: 3})
		if s := none.Fermat(c.near, c.far, c.run*c.run, optics.Slopes{}); s != want || none.InnerM() != 0 {
			t.Fatalf("seed %d: crossing %d: layers of no thickness give %+v, want %+v", seed, i, s, want)
		}
		cut := optics.NewStack(c.nNear, c.nFar, optics.Layer{ThicknessM: 0.3 * c.near, Index: c.nNear}, optics.Layer{ThicknessM: 0.2 * c.far, Index: c.nFar})
		s := cut.Fermat(0.7*c.near, 0.8*c.far, c.run*c.run, optics.Slopes{})
		near(t, "near slope over that of whole layers", s.Near/want.Near, 1, 1e-14)
		near(t, "far slope over that of whole layers", s.Far/want.Far, 1, 1e-14)
		if t.Failed() {
			t.Fatalf("seed %d: crossing %d: %+v", seed, i, c)
		}
	}
	p := pile{[]optics.Layer{{ThicknessM: 1, Index: 1.34}, {ThicknessM: 2, Index: 1.34}, {ThicknessM: 5, Index: 1.34}}, 7}
	if s := p.slopes(); s.Near != 1./8 || s.Far != 1./8 || s.Thin != 1./8 {
		t.Errorf("equal indices: slopes are %+v, want 0.125", s)
	}
}

// From straight ahead to all but along the faces, and past what a ray can reach.
func TestStackEdges(t *testing.T) {
	pane := optics.Layer{ThicknessM: 0.01, Index: 1.49}
	for _, p := range []pile{
		{[]optics.Layer{{ThicknessM: 0.02, Index: 1}, pane, {ThicknessM: 2, Index: 1.34}}, 0},
		{[]optics.Layer{{ThicknessM: 0.02, Index: 1}, pane, {ThicknessM: 2, Index: 1.34}}, 1e9},
		{[]optics.Layer{{ThicknessM: 1e-12, Index: 1}, pane, {ThicknessM: 2, Index: 1.34}}, 2.4},
		{[]optics.Layer{{ThicknessM: 0, Index: 1}, pane, {ThicknessM: 2, Index: 1.34}}, 2.2},
		{[]optics.Layer{{ThicknessM: 0.02, Index: 1}, pane, {ThicknessM: 0, Index: 1.34}}, 5},
		{[]optics.Layer{{ThicknessM: 1, Index: 1.34}, {ThicknessM: 1e-9, Index: 1}, {ThicknessM: 1, Index: 1.34}}, 9},
	} {
		t.Run(fmt.Sprint(p), func(t *testing.T) {
			s, stack := p.slopes(), p.stack()
			first, last := p.ends()
			near(t, "run", s.Near*first.ThicknessM+stack.InnerRun(s, p.run*p.run)+s.Far*last.ThicknessM, 1, 1e-14)
			near(t, "n sin", first.Index*math.Sin(math.Atan(s.Near*p.run)), last.Index*math.Sin(math.Atan(s.Far*p.run)), 1e-14)
			if !(s.Near > 0 && s.Far > 0) {
				t.Errorf("slopes are %+v, want positive ones", s)
			}
		})
	}
	for name, p := range map[string]pile{
		"no way in the gas and too far for water": {[]optics.Layer{{Index: 1}, pane, {ThicknessM: 2, Index: 1.34}}, 2.3},
		"thickness not a number":                  {[]optics.Layer{{ThicknessM: 1, Index: 1}, {ThicknessM: math.NaN(), Index: 1.5}, {ThicknessM: 2, Index: 1.34}}, 2},
		"index not a number":                      {[]optics.Layer{{ThicknessM: 1, Index: 1}, {ThicknessM: 1, Index: math.NaN()}, {ThicknessM: 2, Index: 1.34}}, 2},
	} {
		if s := p.slopes(); math.Abs(s.Near) <= math.MaxFloat64 {
			t.Errorf("%s: slopes are %+v, want none", name, s)
		}
	}
}

// The derivatives against differences of Fermat itself, which is correct by the tests above.
func TestStackChange(t *testing.T) {
	for i, p := range piles(2000, 1) {
		s, run2 := p.stack(), p.run*p.run
		near_, far := p.ends()
		byFar, byRun2 := s.Change(p.slopes(), near_.ThicknessM, far.ThicknessM, run2)
		farByFar, farByRun2 := s.ChangeFar(p.slopes(), byFar, byRun2)
		h := 1e-4 * min(p.run*p.run, far.ThicknessM)
		at := func(far, run2 float64) optics.Slopes {
			return s.Fermat(near_.ThicknessM, far, run2, optics.Slopes{})
		}
		up, down := at(far.ThicknessM+h, run2), at(far.ThicknessM-h, run2)
		near(t, "near slope by the far distance", byFar, (up.Near-down.Near)/(2*h), 1e-6)
		near(t, "far slope by the far distance", farByFar, (up.Far-down.Far)/(2*h), 1e-6)
		up, down = at(far.ThicknessM, run2+h), at(far.ThicknessM, run2-h)
		near(t, "near slope by the squared run", byRun2, (up.Near-down.Near)/(2*h), 1e-6)
		near(t, "far slope by the squared run", farByRun2, (up.Far-down.Far)/(2*h), 1e-6)
		if t.Failed() {
			t.Fatalf("seed %d: pile %d: %+v", seed, i, p)
		}
	}
}

// Bend in tangents is Refract in vectors from layer to layer.
func TestStackBendIsRefract(t *testing.T) {
	r := rand.New(rand.NewPCG(seed, 22))
	for i, p := range piles(2000, 1) {
		rad, s := 1.5*r.Float64(), p.stack()
		got := s.Bend(math.Tan(rad)/p.run, p.run*p.run)
		dir, ok, inner := tilted(rad), true, 0.0
		for k := 1; ok && k < len(p.layers); k++ {
			dir, ok = optics.Refract(dir, up, p.layers[k-1].Index, p.layers[k].Index)
			if k+1 < len(p.layers) {
				inner += p.layers[k].ThicknessM * dir.X / dir.Z
			}
		}
		if ok != (got.Far == got.Far) {
			t.Fatalf("seed %d: pile %d: slopes %+v, refracted %v", seed, i, got, ok)
		}
		if !ok {
			continue
		}
		near(t, "angle in the far medium", math.Atan(got.Far*p.run), dir.AngleRad(up), 1e-7)
		near(t, "inner run", s.InnerRun(got, p.run*p.run)*p.run, inner, 1e-7*inner)
		if t.Failed() {
			t.Fatalf("seed %d: pile %d: %+v", seed, i, p)
		}
	}
}

func TestStackSetNoAllocation(t *testing.T) {
	panes := []optics.Layer{{ThicknessM: 0.01, Index: 1.49}, {ThicknessM: 0.002, Index: 1.4}}
	s := optics.NewStack(1, 1.34, panes...)
	if got := testing.AllocsPerRun(20, func() { s.Set(1, 1.33, panes) }); got != 0 {
		t.Errorf("%g allocations a call, want 0", got)
	}
	if want := optics.NewStack(1, 1.33, panes...); fmt.Sprint(s) != fmt.Sprint(want) {
		t.Errorf("set to %v, want %v", s, want)
	}
}

func BenchmarkStack(b *testing.B) {
	p := pile{[]optics.Layer{{ThicknessM: 0.02, Index: 1}, {ThicknessM: 0.01, Index: 1.49}, {ThicknessM: 2, Index: 1.34}}, 1}
	m := p.stack()
	for name, guess := range map[string]optics.Slopes{"cold": {}, "warm": p.slopes()} {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			var sum float64
			for b.Loop() {
				sum += m.Fermat(0.02, 2, 1, guess).Near
			}
			if sum == 0 {
				b.Fatal("no slope")
			}
		})
	}
}
